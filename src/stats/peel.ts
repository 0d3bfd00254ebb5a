import { fLogSf } from './fLogSf.js';
import { pairDeviance, requireWeightedPair } from './pairDeviance.js';
import type { WeightedPair } from './pairDeviance.js';
import { requirePositiveOrInfinite } from './preconditions.js';

const LOG_STOP = Math.log(0.05);

export interface Blamed {
  readonly index: number;
  /** 1 for a rise, -1 for a fall, against the bins not yet blamed. */
  readonly sign: 1 | -1;
}

export interface Peeled {
  /** In the order in which they were peeled off. */
  readonly blamed: readonly Blamed[];
  /** Adjusted residuals of the whole table, by bin; 0 for an empty bin. */
  readonly residuals: readonly number[];
}

interface Cell {
  readonly index: number;
  readonly excess: number;
  readonly expected: number;
  readonly residual: number;
}

/**
 * Which bins moved: peels off the worst one and asks whether the rest still differ.
 *
 * Shares are relative: when one rises all others fall. So the two weighted rows are tested on a
 * shrinking set S of bins, totals taken within S: G2/(|S|-1) against F(|S|-1, df2). While
 * p <= .05, the bin with the largest adjusted residual
 * r = (y - e)/sqrt(e (1 - t/T)(1 - n/T)) (Haberman 1973, from memory) is blamed, with its sign,
 * and leaves S. Of the last two, whose residuals are equal, the one with the larger
 * |y - e|/e is blamed. (Procedure own.)
 *
 * In: shares (sum 1), effective events > 0 (W may be Infinity), df2 > 0 or Infinity. Out: see
 * `Peeled`. Refuses other input with RangeError. Cost: at most K tests.
 */
export function peel(input: WeightedPair & { readonly df2: number }): Peeled {
  check(input);
  const { now, reference, df2 } = input;
  const blamed: Blamed[] = [];
  let rest = now.map((_, k) => k).filter((k) => (now[k] ?? 0) > 0 || (reference[k] ?? 0) > 0);
  const whole = cells(input, rest);
  while (rest.length >= 2 && differs(input, rest, df2)) {
    const worst = worstOf(cells(input, rest));
    if (worst === undefined) break;
    blamed.push({ index: worst.index, sign: worst.excess > 0 ? 1 : -1 });
    if (rest.length === 2) break;
    rest = rest.filter((k) => k !== worst.index);
  }
  const residuals = now.map((_, k) => whole.find((cell) => cell.index === k)?.residual ?? 0);
  return { blamed, residuals };
}

function check(input: WeightedPair & { readonly df2: number }): void {
  requireWeightedPair(input);
  requirePositiveOrInfinite('df2', input.df2);
}

/** Shares and weights of both sides within the bins `rest`; null when a side has nothing there. */
function within(pair: WeightedPair, rest: readonly number[]): WeightedPair | null {
  const now = rest.map((k) => pair.now[k] ?? 0);
  const reference = rest.map((k) => pair.reference[k] ?? 0);
  const q = now.reduce((a, b) => a + b, 0);
  const p = reference.reduce((a, b) => a + b, 0);
  if (q === 0 || p === 0) return null;
  return {
    now: now.map((share) => share / q),
    weightNow: pair.weightNow * q,
    reference: reference.map((share) => share / p),
    weightReference: pair.weightReference * p,
  };
}

function differs(pair: WeightedPair, rest: readonly number[], df2: number): boolean {
  const part = within(pair, rest);
  if (part === null) return false;
  const df1 = rest.length - 1;
  return fLogSf(pairDeviance(part) / df1, df1, df2) <= LOG_STOP;
}

function cells(pair: WeightedPair, rest: readonly number[]): Cell[] {
  const part = within(pair, rest);
  if (part === null) return [];
  const n = part.weightNow;
  // Share of the reference in the whole: 1 - n/T.
  const other = part.weightReference === Infinity ? 1 : 1 - n / (n + part.weightReference);
  return rest.map((index, at) => {
    const p = part.reference[at] ?? 0;
    const q = part.now[at] ?? 0;
    const joint = q * (1 - other) + p * other;
    const expected = n * joint;
    const excess = n * (q - p) * other;
    const spread = Math.sqrt(expected * Math.max(0, 1 - joint) * other);
    // No spread and an excess: declared impossible, or declared the only one possible.
    const residual = excess === 0 ? 0 : excess / spread;
    return { index, excess, expected, residual };
  });
}

/** Largest residual; of two bins, whose residuals differ by rounding alone, the smaller one. */
function worstOf(found: readonly Cell[]): Cell | undefined {
  const size = (cell: Cell): number =>
    found.length === 2 ? Math.abs(cell.excess) / cell.expected : Math.abs(cell.residual);
  return found.reduce<Cell | undefined>(
    (worst, cell) => (worst === undefined || size(cell) > size(worst) ? cell : worst),
    undefined,
  );
}
