import { validDayStart } from './civil.js';
import { instant, milliseconds, readOffset } from './iso.js';
import { parseLdml } from './ldml.js';
import type { LdmlToken } from './ldml.js';
import type { Zone } from './zone.js';

/** Longest text that is matched; keeps a hostile line cheap. */
const MAX_TEXT = 256;

const MONTHS = [
  ...['january', 'february', 'march', 'april', 'may', 'june'],
  ...['july', 'august', 'september', 'october', 'november', 'december'],
];
const WEEKDAYS = [
  ...['monday', 'tuesday', 'wednesday', 'thursday', 'friday', 'saturday', 'sunday'],
];

/**
 * Reads times written in an LDML pattern; names in English, in any letter case. A letter once reads
 * one or two digits (a year one to four), doubled exactly two; S any number of digits unless
 * another number follows at once; a space any number of spaces. `yy` is 1969-2068, as POSIX
 * strptime has it (from memory). Zone fields read `Z`, `+01`, `+0100` and `+01:00`; without one the
 * time is local. Throws RangeError for a pattern that `parseLdml` refuses.
 */
export function ldmlParser(pattern: string, zone: Zone): (text: string) => number | null {
  const parsed = parseLdml(pattern);
  if (!('tokens' in parsed)) throw new RangeError(`pattern: "${pattern}" ${parsed.problem}`);
  const tokens = parsed.tokens;
  const matcher = new RegExp(`^${tokens.map((_, at) => source(tokens, at)).join('')}$`, 'i');
  const letters = tokens.flatMap((token) => (token.kind === 'field' ? [token] : []));
  return (text) => {
    const match = text.length > MAX_TEXT ? null : matcher.exec(text);
    if (match === null) return null;
    const fields = new Map(letters.map((token, at) => [token.letter, match[at + 1] ?? '']));
    return assemble(fields, zone);
  };
}

function source(tokens: readonly LdmlToken[], at: number): string {
  const token = tokens[at];
  if (token === undefined) return '';
  if (token.kind === 'literal') {
    return token.text.replace(/[^A-Za-z0-9 ]/g, '\\$&').replace(/ +/g, ' +');
  }
  switch (token.letter) {
    case 'a':
      return '([ap]m)';
    case 'E':
      return names(WEEKDAYS, token.width === 4);
    case 'M':
      return token.width > 2 ? names(MONTHS, token.width === 4) : digits(token, tokens[at + 1]);
    case 'Z':
    case 'X':
    case 'x':
      return '(Z|[+-]\\d{2}(?::?\\d{2})?)';
    default:
      return digits(token, tokens[at + 1]);
  }
}

function names(all: readonly string[], full: boolean): string {
  return `(${all.map((name) => (full ? name : name.slice(0, 3))).join('|')})`;
}

function digits(
  token: { readonly letter: string; readonly width: number },
  following: LdmlToken | undefined,
): string {
  const abuts = following?.kind === 'field' && /[yMdHhmsS]/.test(following.letter);
  const named = following?.kind === 'field' && following.letter === 'M' && following.width > 2;
  if (token.letter === 'S') return abuts ? `(\\d{${token.width}})` : '(\\d+)';
  if (token.width > 1 || (abuts && !named)) return `(\\d{${token.width}})`;
  return token.letter === 'y' ? '(\\d{1,4})' : '(\\d{1,2})';
}

function assemble(fields: ReadonlyMap<string, string>, zone: Zone): number | null {
  const number = (letter: string): number => Number(fields.get(letter) ?? 0);
  const dayMs = validDayStart(year(fields.get('y') ?? ''), month(fields), number('d'));
  const hour = fields.has('h') ? halfDayHour(number('h'), fields.get('a')) : number('H');
  if (dayMs === null || hour === null || hour > 23) return null;
  const time = {
    hour,
    minute: number('m'),
    second: number('s'),
    fractionMs: milliseconds(fields.get('S') ?? ''),
  };
  const suffix = fields.get('Z') ?? fields.get('X') ?? fields.get('x');
  const offsetMs = suffix === undefined ? null : readOffset(suffix);
  return Number.isNaN(offsetMs) ? null : instant(dayMs, time, offsetMs, zone);
}

function year(text: string): number {
  const value = Number(text);
  if (text.length !== 2) return value;
  return value < 69 ? 2000 + value : 1900 + value;
}

function month(fields: ReadonlyMap<string, string>): number {
  const text = fields.get('M') ?? '';
  if (/^\d/.test(text)) return Number(text);
  return MONTHS.findIndex((name) => name.startsWith(text.toLowerCase())) + 1;
}

function halfDayHour(hour: number, half: string | undefined): number | null {
  if (hour < 1 || hour > 12) return null;
  return (hour % 12) + (half?.toLowerCase() === 'pm' ? 12 : 0);
}
