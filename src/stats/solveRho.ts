/** Largest intra-window correlation looked for. */
const MAX_RHO = 0.999;

const MAX_STEPS = 200;
const WIDTH = 1e-15;

/**
 * The rho in [0, 0.999] at which a dispersion equation holds.
 *
 * In: `total`, the decreasing left side as a function of rho (deviances divided by their design
 * effects), and `target` > 0. Out: 0 when the left side does not exceed the target at rho = 0
 * (underdispersion is never credited), 0.999 when it still exceeds it there, else the root, to
 * 1e-15. Solved on the reciprocals, because 1/(1 + (N-1) rho) makes those nearly straight, by
 * regula falsi in the Illinois form with a bisection every third step.
 */
export function solveRho(total: (rho: number) => number, target: number): number {
  const atZero = total(0);
  if (!(atZero > target)) return 0;
  const atMost = total(MAX_RHO);
  if (atMost >= target) return MAX_RHO;
  let [lo, gapLo] = [0, 1 / target - 1 / atZero];
  let [hi, gapHi] = [MAX_RHO, 1 / target - 1 / atMost];
  for (let step = 1; step <= MAX_STEPS && hi - lo > WIDTH; step += 1) {
    const secant = lo + ((hi - lo) * gapLo) / (gapLo - gapHi);
    const rho = step % 3 === 0 ? (lo + hi) / 2 : secant;
    if (rho <= lo || rho >= hi) break;
    const gap = 1 / target - 1 / total(rho);
    if (gap === 0) return rho;
    // The end that stays is halved (Illinois), so that both ends move.
    if (gap > 0) [lo, gapLo, gapHi] = [rho, gap, gapHi / 2];
    else [hi, gapHi, gapLo] = [rho, gap, gapLo / 2];
  }
  return (lo + hi) / 2;
}
