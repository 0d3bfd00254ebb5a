/** One part of a pattern: a field, as its letter and width, or text that must be there. */
export type LdmlToken =
  | { readonly kind: 'field'; readonly letter: string; readonly width: number }
  | { readonly kind: 'literal'; readonly text: string };

export type LdmlResult =
  | { readonly tokens: readonly LdmlToken[] }
  /** What is wrong, then what to write. */
  | { readonly problem: string };

/** Widths that are understood, by letter (Unicode UTS 35, part 4, date field symbols). */
const WIDTHS: Readonly<Record<string, readonly number[]>> = {
  y: [1, 2, 4],
  M: [1, 2, 3, 4],
  d: [1, 2],
  H: [1, 2],
  h: [1, 2],
  m: [1, 2],
  s: [1, 2],
  S: [1, 2, 3, 4, 5, 6, 7, 8, 9],
  a: [1, 2, 3],
  Z: [1, 2, 3, 5],
  X: [1, 2, 3],
  x: [1, 2, 3],
  E: [1, 2, 3, 4],
};

const MAX_PATTERN = 128;

/** Splits an LDML date pattern into tokens and checks that it gives one whole time. */
export function parseLdml(pattern: string): LdmlResult {
  if (pattern.length > MAX_PATTERN) {
    return { problem: `is longer than ${MAX_PATTERN} characters; write a shorter pattern` };
  }
  const read = tokenise(pattern);
  if (!('tokens' in read)) return read;
  const problem = unusable(read.tokens);
  return problem === null ? read : { problem };
}

function tokenise(pattern: string): LdmlResult {
  const tokens: LdmlToken[] = [];
  let at = 0;
  while (at < pattern.length) {
    const char = pattern[at] ?? '';
    if (char === "'") {
      const quoted = readQuoted(pattern, at);
      if (quoted === null) {
        return { problem: `has a quote that does not end; write '' for a quote` };
      }
      tokens.push({ kind: 'literal', text: quoted.text });
      at = quoted.end;
    } else if (/[A-Za-z]/.test(char)) {
      const end = runEnd(pattern, at);
      const problem = unknownField(char, end - at);
      if (problem !== null) return { problem };
      tokens.push({ kind: 'field', letter: char, width: end - at });
      at = end;
    } else {
      tokens.push({ kind: 'literal', text: char });
      at += 1;
    }
  }
  return { tokens };
}

/** Quoted text from an opening quote; two quotes are one, inside and outside of quoted text. */
function readQuoted(pattern: string, from: number): { text: string; end: number } | null {
  if (pattern[from + 1] === "'") return { text: "'", end: from + 2 };
  let text = '';
  for (let at = from + 1; at < pattern.length; at += 1) {
    if (pattern[at] !== "'") text += pattern[at] ?? '';
    else if (pattern[at + 1] !== "'") return { text, end: at + 1 };
    else {
      text += "'";
      at += 1;
    }
  }
  return null;
}

function runEnd(pattern: string, from: number): number {
  let end = from + 1;
  while (pattern[end] === pattern[from]) end += 1;
  return end;
}

function unknownField(letter: string, width: number): string | null {
  const widths = WIDTHS[letter];
  if (widths === undefined) {
    const known = Object.keys(WIDTHS).join(' ');
    return `has the letter ${letter}, which is not read; write letters of ${known}, or quote it`;
  }
  if (widths.includes(width)) return null;
  const choices = widths.map((count) => letter.repeat(count)).join(', ');
  return `has ${letter.repeat(width)}, which is not read; write one of ${choices}`;
}

function unusable(tokens: readonly LdmlToken[]): string | null {
  const letters = tokens.flatMap((token) => (token.kind === 'field' ? [token.letter] : []));
  const twice = letters.find((letter, index) => letters.indexOf(letter) !== index);
  if (twice !== undefined) return `has ${twice} twice; write each field once`;
  for (const letter of ['y', 'M', 'd']) {
    if (!letters.includes(letter)) return `has no ${letter}; write a year, a month and a day`;
  }
  const has = (letter: string): boolean => letters.includes(letter);
  if (has('h') !== has('a')) return 'needs h and a together; write both, or H for 0 to 23';
  if (has('h') && has('H')) return 'has both h and H; write one of them';
  if (letters.filter((letter) => 'ZXx'.includes(letter)).length > 1) {
    return 'has two zone fields; write one of Z, X and x';
  }
  if (has('S') && !has('s')) return 'has a fraction without seconds; write s before S';
  if (has('s') && !has('m')) return 'has seconds without minutes; write m before s';
  return has('m') && !has('h') && !has('H') ? 'has minutes without hours; write H before m' : null;
}
