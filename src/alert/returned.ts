import { designWeight } from '../stats/designWeight.js';
import { returnBounds } from '../stats/returnBounds.js';
import type { Alarm, Carriers } from '../terms/recipe.js';
import type { Counts } from '../terms/tally.js';

/** Lengths, in windows, over which a return is looked for. */
export const RETURN_LENGTHS = [3, 6, 12, 24] as const;

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

/** The rule itself, on pooled windows. */
export function isBack(alarm: Alarm, pool: Pool): boolean {
  if (pool.weight <= 0) return false;
  const { before, now } = alarm.carriers;
  const reference = share(before);
  const bounds = returnBounds({
    raise: { share: share(now), weight: alarm.weightNow, reference },
    since: { share: share(pool.share), weight: pool.weight, reference },
    weightReference: alarm.weightReference ?? Infinity,
    df2: alarm.df2 ?? Infinity,
  });
  return bounds.remainder < bounds.allowed || bounds.distance < alarm.tolerance;
}

/** Sums of shares may end a rounding error above 1. */
function share(sum: number): number {
  return Math.min(1, sum);
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
