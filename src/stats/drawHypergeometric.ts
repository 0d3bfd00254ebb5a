import { uniformFloat64 } from 'pure-rand/distribution/uniformFloat64';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';

/** An urn: `total` events, `marked` of them of one kind, `drawn` taken out. */
export interface Urn {
  readonly total: number;
  readonly marked: number;
  readonly drawn: number;
}

/**
 * One hypergeometric number: how many marked events come out of the urn.
 *
 * By inversion outwards from the mode, so that about one standard deviation of steps is enough.
 * In: `logFactorial` of whole numbers up to total. Out: a whole number within its bounds.
 * Advances `random` by one draw.
 */
export function drawHypergeometric(
  random: RandomGenerator,
  urn: Urn,
  logFactorial: (n: number) => number,
): number {
  const { total, marked, drawn } = urn;
  const least = Math.max(0, drawn + marked - total);
  const most = Math.min(drawn, marked);
  let left = uniformFloat64(random);
  if (least === most) return least;
  const mode = Math.floor(((drawn + 1) * (marked + 1)) / (total + 2));
  const rest = total - marked - drawn;
  let [down, up] = [mode, mode];
  let below = Math.exp(logMass(urn, mode, logFactorial));
  let above = below;
  left -= below;
  while (left > 0 && (down > least || up < most)) {
    if (up < most) {
      above *= ((marked - up) * (drawn - up)) / ((up + 1) * (rest + up + 1));
      up += 1;
      left -= above;
      if (left <= 0) return up;
    }
    if (down > least) {
      below *= (down * (rest + down)) / ((marked - down + 1) * (drawn - down + 1));
      down -= 1;
      left -= below;
      if (left <= 0) return down;
    }
    // What rounding left over belongs to no value: give it to the mode.
    if (above + below === 0) break;
  }
  return mode;
}

function logMass(urn: Urn, x: number, logFactorial: (n: number) => number): number {
  const { total, marked, drawn } = urn;
  const choose = (n: number, k: number): number =>
    logFactorial(n) - logFactorial(k) - logFactorial(n - k);
  return choose(marked, x) + choose(total - marked, drawn - x) - choose(total, drawn);
}
