import { requirePositive } from './preconditions.js';

/** From here up the series below is exact to a double (first term left out: 4e-17). */
const SERIES_FROM = 15;

/**
 * Trigamma: the derivative of digamma.
 *
 * In: x, finite and > 0. Out: > 0; Infinity where 1/x^2 is too large for a double (x under
 * 7e-155). Refuses anything else with RangeError.
 * Recurrence and asymptotic series: Abramowitz & Stegun 6.4.6 and 6.4.12, from memory.
 * Measured against 40 digits at 41 points, x from 1e-9 to 1e9 (test/published/polygamma.py):
 * relative error at most 1e-15. Cost: constant.
 */
export function trigamma(x: number): number {
  requirePositive('x', x);
  let at = x;
  let stepped = 0;
  while (at < SERIES_FROM) {
    stepped += 1 / (at * at);
    at += 1;
  }
  const r = 1 / at;
  const u = r * r;
  const tail = 1 / 30 - u * (5 / 66 - (u * 691) / 2730);
  const series = r * u * (1 / 6 - u * (1 / 30 - u * (1 / 42 - u * tail)));
  return stepped + (r + u / 2 + series);
}
