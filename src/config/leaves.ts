import { RE2JS, RE2JSException } from 're2js';
import { z } from 'zod';
import type { TimeTools } from '../terms/time.js';

/** What reading one text gave: a value, or what is wrong and what to write instead. */
export type Read<T> = { readonly value: T } | { readonly refused: string };

export type Leaf<T> = z.ZodType<T, string>;

/** How a leaf looks in the JSON Schema, where numbers are numbers. */
export type LeafJson = Readonly<Record<string, unknown>>;

/** JSON Schema of each leaf; the leaves themselves all read text. */
export const leafJson = z.registry<{ readonly json: LeafJson }>();

/** A leaf of the schema: text in, value out. */
export function leaf<T>(json: LeafJson, read: (text: string) => Read<T>): Leaf<T> {
  const schema = z.string().transform((text, context): T => {
    const result = read(text);
    if ('value' in result) return result.value;
    context.addIssue({ code: 'custom', message: result.refused });
    return z.NEVER;
  });
  return schema.register(leafJson, { json });
}

const TEXT = { type: 'string' };
const MAX_PATH_PARTS = 16;

/** Text as written, whatever YAML would make of it. */
export function anyText(): Leaf<string> {
  return leaf({ type: ['string', 'number', 'boolean', 'null'] }, (text) => ({ value: text }));
}

export function someText(): Leaf<string> {
  return leaf({ ...TEXT, minLength: 1 }, (text) =>
    text.trim() === ''
      ? { refused: 'is empty; write a text or leave the key out' }
      : { value: text },
  );
}

/** One of the words; `later` ones are known but not built yet. */
export function choice<T extends string>(
  words: readonly T[],
  later: readonly string[] = [],
): Leaf<T> {
  return leaf({ enum: words }, (text) => {
    const word = words.find((known) => known === text);
    if (word !== undefined) return { value: word };
    const what = later.includes(text) ? 'is not available yet' : 'is not known here';
    return { refused: `${what}; write ${words.join(' or ')}` };
  });
}

/** `true` or `false`, where only some of them may be written. */
export function flag<T extends 'true' | 'false'>(words: readonly T[]): Leaf<T> {
  const json = words.length === 1 ? { const: words[0] === 'true' } : { type: 'boolean' };
  return leaf(json, (text) => {
    const word = words.find((known) => known === text);
    return word === undefined
      ? { refused: `is not known here; write ${words.join(' or ')}` }
      : { value: word };
  });
}

export function wholeNumber(least: number, most: number): Leaf<number> {
  return leaf({ type: 'integer', minimum: least, maximum: most }, (text) => {
    const value = /^\d{1,12}$/.test(text) ? Number(text) : NaN;
    if (value >= least && value <= most) return { value };
    return { refused: `is not a whole number from ${least} to ${most}; write one` };
  });
}

/** A decimal number within the bounds; `what` names them in words. */
export function decimal(accepts: (value: number) => boolean, what: string): Leaf<number> {
  return leaf({ type: 'number' }, (text) => {
    const value = /^[+-]?\d{1,20}(\.\d{1,20})?([eE][+-]?\d{1,3})?$/.test(text) ? Number(text) : NaN;
    if (Number.isFinite(value) && accepts(value)) return { value };
    return { refused: `is not ${what}; write one` };
  });
}

export function duration(time: TimeTools, leastMs: number, mostMs: number): Leaf<number> {
  const range = `${time.formatDuration(leastMs)} to ${time.formatDuration(mostMs)}`;
  return leaf({ ...TEXT, pattern: '^[0-9]+(ms|s|m|h|d|w)$' }, (text) => {
    const value = time.parseDuration(text);
    if (value === null) {
      return {
        refused: 'is not a duration; write a whole number with ms, s, m, h, d or w, such as 30s',
      };
    }
    if (value >= leastMs && value <= mostMs) return { value };
    return { refused: `is out of range; write a duration from ${range}` };
  });
}

/** Path of a field, split at its dots. */
export function fieldPath(): Leaf<readonly string[]> {
  return leaf({ ...TEXT, minLength: 1 }, (text) => {
    const parts = text.split('.');
    if (parts.every((part) => part !== '') && parts.length <= MAX_PATH_PARTS) {
      return { value: parts };
    }
    return { refused: `is not a field path; write names joined by dots, such as a.b.c` };
  });
}

export function zoneName(time: TimeTools): Leaf<string> {
  return leaf(TEXT, (text) =>
    time.isZone(text)
      ? { value: text }
      : { refused: 'is not an IANA time zone; write a name such as UTC or Europe/Berlin' },
  );
}

/** A percentage as written: `units` of 10^-decimals per cent, exact. */
export interface Percent {
  readonly units: number;
  readonly decimals: number;
}

/** Reads `92%` or `0.5%`, from 0 to 100 with at most 9 decimals. */
function readPercent(text: string): Read<Percent> {
  const parts = /^(\d{1,3})(?:\.(\d{1,9}))? ?%$/.exec(text);
  if (parts === null) {
    const bare = /^\d*\.?\d+$/.test(text);
    return bare
      ? { refused: `has no unit; write a percentage with its sign, such as 1%` }
      : { refused: 'is not a percentage; write e.g. 1% or 0.5%' };
  }
  const fraction = parts[2] ?? '';
  const percent = { units: Number(`${parts[1]}${fraction}`), decimals: fraction.length };
  if (percent.units <= 100 * 10 ** percent.decimals) return { value: percent };
  return { refused: 'is over 100%; write a percentage from 0% to 100%' };
}

const PERCENT = { ...TEXT, pattern: '^[0-9]{1,3}([.][0-9]{1,9})? ?%$' };

/** A percentage as a fraction 0..1. */
export function percentage(): Leaf<number> {
  return leaf(PERCENT, (text) => {
    const read = readPercent(text);
    // The exponent goes into the text: dividing 0.7 by 100 would not give the nearest number.
    if ('refused' in read) return read;
    return { value: Number(`${read.value.units}e-${read.value.decimals + 2}`) };
  });
}

/** A declared share. Nothing is impossible yet, so 0% is refused. */
export function declaredShare(): Leaf<Percent> {
  return leaf(PERCENT, (text) => {
    const read = readPercent(text);
    if ('refused' in read || read.value.units > 0) return read;
    return { refused: 'is an impossible category, which is not available yet; leave it out' };
  });
}

/** A linear-time pattern, as RE2 writes them. Named groups are `(?P<name>...)`. */
export function linearPattern(): Leaf<string> {
  return leaf({ ...TEXT, minLength: 1 }, (text) => {
    try {
      RE2JS.compile(text);
      return { value: text };
    } catch (error) {
      if (!(error instanceof RE2JSException)) throw error;
      const why = error.message.replace(/\s+/g, ' ').replace(/^error parsing regexp: /, '');
      return { refused: `is not a pattern (${why}); write RE2 syntax` };
    }
  });
}

/** Names of the pattern's named groups, in code-point order. The pattern must compile. */
export function namedGroups(pattern: string): readonly string[] {
  return Object.keys(RE2JS.compile(pattern).namedGroups()).toSorted();
}
