import { requirePositive } from './preconditions.js';
import { trigamma } from './trigamma.js';

const SERIES_FROM = 15;
const MAX_STEPS = 60;
const WIDTH = 4e-16;
/** Beyond these the first term of trigamma is all that a double shows. */
const LARGEST = 1e17;
const SMALLEST = 1e-17;

/**
 * The x > 0 at which trigamma(x) = y.
 *
 * In: y, finite and > 0. Out: > 0; Infinity where 1/y is too large for a double (y under
 * 6e-309). Refuses anything else with RangeError.
 * Newton's method on 1/trigamma, which is increasing and convex, so that from its second step on
 * it comes down to the root (idea: Smyth 2004, appendix, from memory). Starts at 1/sqrt(y) for
 * y > 1 and 1/y + 1/2 otherwise.
 * Measured against 40 digits at 46 points, y from 1e-9 to 1e18 (test/published/polygamma.py):
 * relative error at most 2e-15. Cost: 1 to 6 steps as a rule, 60 at most.
 */
export function inverseTrigamma(y: number): number {
  requirePositive('y', y);
  if (y > LARGEST) return 1 / Math.sqrt(y);
  if (y < SMALLEST) return 1 / y;
  let x = y > 1 ? 1 / Math.sqrt(y) : 1 / y + 0.5;
  for (let step = 0; step < MAX_STEPS; step += 1) {
    const value = trigamma(x);
    const change = (value * (1 - value / y)) / tetragamma(x);
    x += change;
    if (Math.abs(change) <= WIDTH * x) return x;
  }
  return x;
}

/**
 * The derivative of trigamma: Abramowitz & Stegun 6.4.6 and 6.4.13, from memory. It only sets
 * the length of a step, so its own rounding does not reach the answer.
 */
function tetragamma(x: number): number {
  let at = x;
  let stepped = 0;
  while (at < SERIES_FROM) {
    stepped += 2 / (at * at * at);
    at += 1;
  }
  const r = 1 / at;
  const u = r * r;
  const series = u * u * (1 / 2 - u * (1 / 6 - u * (1 / 6 - u * (3 / 10))));
  return -(stepped + u + u * r + series);
}
