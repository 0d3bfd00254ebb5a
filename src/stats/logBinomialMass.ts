import { devianceTerm } from './devianceTerm.js';
import { stirlingError } from './stirlingError.js';

const LOG_TWO_PI = Math.log(2 * Math.PI);

/**
 * log of Gamma(x+y+1) / (Gamma(x+1) Gamma(y+1)) p^x q^y: the binomial mass at x successes and y
 * failures, both real.
 *
 * In: x >= 0, y >= 0, finite; p and q strictly between 0 and 1 with p + q = 1. Both are taken,
 * because the smaller one cannot be had from the larger without loss. Out: a real number <= 0 up to
 * rounding.
 * Written as deviances from x + y times p and q (Loader 2000, "Fast and accurate computation of
 * binomial probabilities", from memory). Cost: constant.
 */
export function logBinomialMass(x: number, y: number, p: number, q: number): number {
  if (x === 0) return y * logOf(q, p);
  if (y === 0) return x * logOf(p, q);
  const n = x + y;
  const stirling = stirlingError(n) - stirlingError(x) - stirlingError(y);
  const scale = 0.5 * (Math.log(n) - Math.log(x) - Math.log(y) - LOG_TWO_PI);
  return scale + stirling - devianceTerm(x, n * p) - devianceTerm(y, n * q);
}

/** log of a share; close to 1 its complement knows it better. */
function logOf(share: number, complement: number): number {
  return share > 0.5 ? Math.log1p(-complement) : Math.log(share);
}
