import fc from 'fast-check';
import { expect } from 'vitest';

export const RUNS = { seed: 31_415, numRuns: 70 };

/** Counts of `width` categories; zeros are as likely as they are in life. */
export function countsOf(width: number, max = 300): fc.Arbitrary<number[]> {
  const count = fc.oneof(
    { weight: 1, arbitrary: fc.constant(0) },
    { weight: 5, arbitrary: fc.integer({ min: 0, max }) },
  );
  return fc.array(count, { minLength: width, maxLength: width });
}

const width = fc.integer({ min: 2, max: 7 });

/** Counts of two samples over the same categories, each with an event. */
export const pairOf = width
  .chain((k) => fc.tuple(countsOf(k), countsOf(k)))
  .filter((rows) => rows.every((row) => row.some((x) => x > 0)));

/** A table of 1 to 5 rows. */
export const tableOf = fc
  .tuple(fc.integer({ min: 1, max: 5 }), width)
  .chain(([rows, k]) => fc.array(countsOf(k), { minLength: rows, maxLength: rows }));

/** Windows in time order, all with events, and several of them. */
export const windowsOf = fc.tuple(fc.integer({ min: 6, max: 14 }), width).chain(([b, k]) =>
  fc.array(
    countsOf(k).filter((row) => row.some((x) => x > 0)),
    { minLength: b, maxLength: b },
  ),
);

/** A number that picks a category, a window or a shuffle. */
export const pick = fc.nat({ max: 1_000_000 });

export function sharesOf(counts: readonly number[]): number[] {
  const total = counts.reduce((a, b) => a + b, 0);
  return counts.map((x) => x / total);
}

/** One of the orders of `length` things; 0 gives the first of them. */
export function orderOf(length: number, seed: number): number[] {
  const left = Array.from({ length }, (_, i) => i);
  const order: number[] = [];
  let rest = seed + 1;
  while (left.length > 0) {
    order.push(...left.splice(rest % left.length, 1));
    rest = (rest * 48_271) % 2_147_483_647;
  }
  return order;
}

export function arrange<T>(values: readonly T[], order: readonly number[]): T[] {
  return order.flatMap((index) => values.slice(index, index + 1));
}

export function transpose(table: readonly (readonly number[])[]): number[][] {
  return (table[0] ?? []).map((_, k) => table.map((row) => row[k] ?? 0));
}

/** Category `seed` (modulo K) divided into two equal ones, the second put at the end. */
export function halve(values: readonly number[], seed: number): number[] {
  const at = seed % values.length;
  const half = (values[at] ?? 0) / 2;
  return [...values.map((x, k) => (k === at ? half : x)), half];
}

/** Category `seed` (modulo K) added to the next one, and then left out. */
export function merge(values: readonly number[], seed: number): number[] {
  const from = seed % values.length;
  const into = (from + 1) % values.length;
  const added = values.map((x, k) => (k === into ? x + (values[from] ?? 0) : x));
  return added.filter((_, k) => k !== from);
}

/** Equal to ten digits, infinities included. */
export function expectSame(value: number, other: number, digits = 1e-10): void {
  if (value === other) return;
  expect(Math.abs(value - other)).toBeLessThanOrEqual(digits * Math.max(1, Math.abs(other)));
}

/** `small` is not above `large`, but for rounding. */
export function expectAtMost(small: number, large: number): void {
  if (small === large) return;
  expect(small).toBeLessThanOrEqual(large + 1e-10 * Math.max(1, Math.abs(large)));
}

/** Natural logarithm of a probability. */
export function expectLogP(logP: number): void {
  expect(logP).toBeLessThanOrEqual(0);
  expect(logP).not.toBeNaN();
}

/** No NaN anywhere inside; whatever is called p or logP is a probability. */
export function expectFinitePs(value: unknown, name = 'result'): void {
  if (typeof value === 'number') {
    if (Number.isNaN(value)) throw new Error(`${name} is NaN`);
    if (/\.p$/.test(name) && !(value >= 0 && value <= 1)) throw new Error(`${name} is ${value}`);
    if (/logP$/i.test(name) && value > 0) throw new Error(`${name} is ${value}`);
  } else if (typeof value === 'object' && value !== null) {
    for (const [key, inner] of Object.entries(value)) expectFinitePs(inner, `${name}.${key}`);
  }
}
