import { designWeight } from '../stats/designWeight.js';
import { tUpperQuantile } from '../stats/tUpperQuantile.js';
import type { Alarm, Carriers } from '../terms/recipe.js';
import type { Counts } from '../terms/tally.js';

/** Lengths, in windows, over which a return is looked for. */
export const RETURN_LENGTHS = [3, 6, 12, 24] as const;

/** Repeated looks ask for a strict quantile. */
const RETURN_ERROR = 0.001;

/** What remains of the shift must be under this part of what it was. */
const REMAINDER = 1 / 3;

/**
 * Whether the mix has come back, from the windows after the raise in time order (thin and silent
 * ones included). For one of the lengths, the carriers' share, pooled over the last windows, must
 * be shown to keep less than a third of its first distance from the reference, or to lie within
 * the tolerance. Own construction, proven by simulation only.
 */
export function hasReturned(
  alarm: Alarm,
  after: readonly Counts[],
  lengths: readonly number[] = RETURN_LENGTHS,
): boolean {
  return lengths.some(
    (length) => after.length >= length && isBack(alarm, poolWindows(alarm, after.slice(-length))),
  );
}

/** Effective events and the carriers' share over a run of windows. */
interface Pool {
  readonly weight: number;
  readonly share: number;
}

/** The rule itself, on pooled windows: exported for its published check values. */
export function isBack(alarm: Alarm, pool: Pool): boolean {
  if (pool.weight <= 0) return false;
  const bounds = returnBounds(alarm, pool);
  return bounds.remainder < bounds.allowed || bounds.distance < alarm.tolerance;
}

/** Upper bounds of what is left of the shift, by both forms of the rule, and a third of it. */
export function returnBounds(
  alarm: Alarm,
  pool: Pool,
): { readonly remainder: number; readonly distance: number; readonly allowed: number } {
  const { before, now } = alarm.carriers;
  const sign = now >= before ? 1 : -1;
  const first = Math.abs(now - before);
  const left = sign * (pool.share - before);
  const w = alarm.weightReference;
  const t = tUpperQuantile(RETURN_ERROR, alarm.df2 ?? Infinity);
  const p = mean(pool.share, pool.weight, before, w);
  const p0 = mean(now, alarm.weightNow, before, w);
  const perReference = w === null ? 0 : 1 / w;
  const spread = p * (1 - p);
  const variance =
    spread / pool.weight +
    (p0 * (1 - p0)) / (9 * alarm.weightNow) +
    ((4 * spread) / 9) * perReference;
  return {
    remainder: left + t * Math.sqrt(variance),
    distance: left + t * Math.sqrt(spread * (1 / pool.weight + perReference)),
    allowed: first * REMAINDER,
  };
}

function mean(share: number, weight: number, before: number, reference: number | null): number {
  return reference === null ? before : (weight * share + reference * before) / (weight + reference);
}

function poolWindows(alarm: Alarm, windows: readonly Counts[]): Pool {
  let weight = 0;
  let carried = 0;
  for (const counts of windows) {
    const { n, inside } = split(counts, alarm.carriers);
    const w = designWeight(n, alarm.rho);
    weight += w;
    carried += n === 0 ? 0 : (w * inside) / n;
  }
  return { weight, share: weight === 0 ? 0 : carried / weight };
}

function split(counts: Counts, carriers: Carriers): { n: number; inside: number } {
  const inside = new Set(carriers.categories);
  const named = new Set(carriers.named);
  let n = 0;
  let among = 0;
  for (const [category, count] of counts) {
    n += count;
    const belongs = named.has(category) ? inside.has(category) : carriers.unnamed;
    if (belongs) among += count;
  }
  return { n, inside: among };
}
