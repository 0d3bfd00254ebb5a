import { devianceTerm } from './devianceTerm.js';
import { stirlingError } from './stirlingError.js';

/**
 * log of m^x e^-m / Gamma(x + 1), the Poisson mass at x for mean m, x real.
 *
 * In: x >= 0, m > 0, both finite. Out: a real number (a density in x when x is not whole).
 * Written as a deviance, so that nothing large is subtracted from something large (Loader 2000,
 * "Fast and accurate computation of binomial probabilities", from memory). Cost: constant.
 */
export function logPoissonMass(x: number, m: number): number {
  if (x === 0) return -m;
  return -devianceTerm(x, m) - stirlingError(x) - 0.5 * Math.log(2 * Math.PI * x);
}
