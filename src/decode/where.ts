import { RE2JS } from 're2js';
import type { WhereConfig } from '../config/types.js';
import { NOT_SCALAR } from './types.js';
import type { FieldPath, FieldValue } from './types.js';

/** Says whether a record belongs to a mix, from its decoded values. */
export type Condition = (fields: readonly FieldValue[]) => boolean;

type ValueTest = (value: FieldValue) => boolean;

/** A decimal number as people and JSON write it; not `Infinity`, `0x10` or the empty text. */
const NUMBER = /^\s*[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?\s*$/;

/**
 * Compiles a mix's `where`: every condition must hold, and every key of each.
 *
 * A missing value passes only `missing: true`; an object or a list is not missing and passes
 * nothing else. `is` compares texts, `at_least` and `at_most` numbers (either end included).
 *
 * @returns null when there is nothing to check
 */
export function compileWhere(
  where: readonly WhereConfig[],
  slotOf: (path: FieldPath) => number,
): Condition | null {
  const tests = where.flatMap((entry) => {
    const slot = slotOf(entry.field);
    return valueTests(entry).map((test) => ({ slot, test }));
  });
  if (tests.length === 0) return null;
  return (fields) => tests.every(({ slot, test }) => test(fields[slot] ?? null));
}

function valueTests(entry: WhereConfig): ValueTest[] {
  const tests: ValueTest[] = [];
  const { is, atLeast, atMost, matches, missing } = entry;
  if (missing !== null) tests.push((value) => (value === null) === missing);
  if (is !== null) {
    const texts = new Set<FieldValue>(is);
    tests.push((value) => texts.has(value));
  }
  if (atLeast !== null) tests.push((value) => numberOf(value) >= atLeast);
  if (atMost !== null) tests.push((value) => numberOf(value) <= atMost);
  if (matches !== null) {
    const pattern = RE2JS.compile(matches);
    tests.push((value) => typeof value === 'string' && pattern.matcher(value).find());
  }
  return tests;
}

/** NaN, which no bound lets pass, for what is not a number. */
function numberOf(value: FieldValue): number {
  if (value === null || value === NOT_SCALAR || !NUMBER.test(value)) return NaN;
  return Number(value);
}
