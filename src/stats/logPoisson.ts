import { devianceTerm } from './devianceTerm.js';
import { stirlingError } from './stirlingError.js';

/**
 * log of the Poisson probability of x events where `mean` are expected.
 *
 * In: whole x >= 0, mean > 0. Out: in [-Infinity, 0]. Through the deviance and Stirling's error
 * instead of differences of large logarithms (Loader 2000, "Fast and accurate computation of
 * binomial probabilities", from memory). Independent Poisson counts given their sum are
 * multinomial, which is why exact tests use it.
 */
export function logPoisson(x: number, mean: number): number {
  if (x === 0) return -mean;
  return -devianceTerm(x, mean) - 0.5 * Math.log(2 * Math.PI * x) - stirlingError(x);
}
