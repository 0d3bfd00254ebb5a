import { pairDeviance } from './pairDeviance.js';

const STEPS = 100;
const FIRST = 2 ** -20;

/**
 * The rise of one share at which the deviance of a window reaches a given noncentrality.
 *
 * One category goes from p to p + delta, the others shrink in proportion. Their ratios stay what
 * they were, so they act as one: lambda_G(delta) = 2 w sum q log(q/pJ) + 2 W sum p log(p/pJ) over
 * the two cells (p, 1-p) and (p + delta, 1 - p - delta).
 *
 * In: share strictly between 0 and 1, effective events now and of the reference (> 0, the latter
 * may be Infinity), lambda > 0. Out: delta in (0, 1 - share], or null when even a share of 1 falls
 * short. Cost: a hundred bisections, to the last bit or so.
 */
export function shiftForNoncentrality(input: {
  readonly share: number;
  readonly weightNow: number;
  readonly weightReference: number;
  readonly lambda: number;
}): number | null {
  return smallestShift(input.share, (delta) => shiftDeviance(delta, input) >= input.lambda);
}

/** lambda_G(delta), see `shiftForNoncentrality`. */
export function shiftDeviance(
  delta: number,
  at: {
    readonly share: number;
    readonly weightNow: number;
    readonly weightReference: number;
  },
): number {
  const { share, weightNow, weightReference } = at;
  const now = [share + delta, Math.max(0, 1 - share - delta)];
  return pairDeviance({ now, weightNow, reference: [share, 1 - share], weightReference });
}

/**
 * The least delta in (0, 1 - share] that is enough, or null; whatever is more is enough too.
 * Looked for from small shifts upwards, because `isEnough` is dear far beyond the answer.
 */
export function smallestShift(share: number, isEnough: (delta: number) => boolean): number | null {
  const most = 1 - share;
  let [lo, hi] = [0, most * FIRST];
  while (!isEnough(hi)) {
    if (hi === most) return null;
    [lo, hi] = [hi, Math.min(most, 2 * hi)];
  }
  for (let step = 0; step < STEPS; step += 1) {
    const middle = lo + (hi - lo) / 2;
    if (middle <= lo || middle >= hi) break;
    if (isEnough(middle)) hi = middle;
    else lo = middle;
  }
  return hi;
}
