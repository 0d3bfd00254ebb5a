import { requirePositive } from './preconditions.js';

/** From here up the series below is exact to a double (first term left out: 3e-18). */
const SERIES_FROM = 15;

/**
 * Digamma: the derivative of log Gamma.
 *
 * In: x, finite and > 0. Out: a real number; -Infinity where 1/x is too large for a double (x under
 * 6e-309). Refuses anything else with RangeError.
 * Recurrence and asymptotic series: Abramowitz & Stegun 6.3.5 and 6.3.18, from memory.
 * Measured against 40 digits at 41 points, x from 1e-9 to 1e9 (test/published/polygamma.py):
 * error at most 2e-15 x max(1, |digamma|). Cost: constant.
 */
export function digamma(x: number): number {
  requirePositive('x', x);
  let at = x;
  let stepped = 0;
  while (at < SERIES_FROM) {
    stepped += 1 / at;
    at += 1;
  }
  const u = 1 / (at * at);
  const tail = 1 / 240 - u * (1 / 132 - (u * 691) / 32760);
  const series = u * (1 / 12 - u * (1 / 120 - u * (1 / 252 - u * tail)));
  return Math.log(at) - 0.5 / at - series - stepped;
}
