const MAX_STEPS = 400;
const WIDTH = 4e-16;

/**
 * The x > 0 at which a decreasing log tail meets `logAlpha`.
 *
 * In: `logSf`, continuous and decreasing on x > 0; `logAlpha` < 0; `start`, a first guess > 0
 * (the closer, the fewer steps). Out: x to the last few bits. A bracket is grown from the
 * guess, then regula falsi in the Illinois form (Dowell & Jarratt 1971, from memory) with a
 * bisection whenever that drags. Cost: 6 to 12 tails from a good guess, never over 1,200.
 * Throws RangeError when the root lies beyond what a double (or its square) can hold.
 */
export function solveUpperQuantile(
  logSf: (x: number) => number,
  options: { readonly logAlpha: number; readonly start: number },
): number {
  const gap = (x: number): number => logSf(x) - options.logAlpha;
  let { lo, hi, gapLo, gapHi } = bracket(gap, options.start);
  for (let step = 1; step <= MAX_STEPS && hi - lo > WIDTH * hi; step += 1) {
    const secant = lo + ((hi - lo) * gapLo) / (gapLo - gapHi);
    const halves = step % 4 === 0 || !(secant > lo && secant < hi);
    const x = halves ? lo + (hi - lo) / 2 : secant;
    if (x <= lo || x >= hi) break;
    const at = gap(x);
    if (at === 0) return x;
    // The end that stays is halved (Illinois), so that both ends move.
    if (at > 0) [lo, gapLo, gapHi] = [x, at, gapHi / 2];
    else [hi, gapHi, gapLo] = [x, at, gapLo / 2];
  }
  return lo + (hi - lo) / 2;
}

interface Bracket {
  readonly lo: number;
  readonly hi: number;
  readonly gapLo: number;
  readonly gapHi: number;
}

function bracket(gap: (x: number) => number, start: number): Bracket {
  let lo = start;
  let gapLo = gap(lo);
  let hi = lo;
  let gapHi = gapLo;
  let factor = 1 + 1e-7;
  for (let step = 0; step < MAX_STEPS && gapHi > 0; step += 1) {
    [lo, gapLo] = [hi, gapHi];
    hi *= factor;
    gapHi = gap(hi);
    factor = Math.min(factor ** 8, 16);
  }
  if (gapHi === -Infinity) {
    throw new RangeError('alpha: its critical value is too large for a double; use a larger alpha');
  }
  for (let step = 0; step < MAX_STEPS && gapLo < 0; step += 1) {
    [hi, gapHi] = [lo, gapLo];
    lo /= factor;
    gapLo = gap(lo);
    factor = Math.min(factor ** 8, 16);
  }
  return { lo, hi, gapLo, gapHi };
}
