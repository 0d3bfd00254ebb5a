import { benjaminiHochberg } from './benjaminiHochberg.js';
import { harmonicNumber } from './harmonicNumber.js';
import { requireFraction } from './preconditions.js';

/**
 * Which tests the step-up procedure of Benjamini & Yekutieli (2001) rejects, on the log scale.
 *
 * `benjaminiHochberg` at level / (1 + 1/2 + ... + 1/m): the expected share of false among the
 * rejections is at most `level` whatever the dependence, where the plain procedure asks for
 * independent or positively dependent tests.
 * In, out and refusals: as `benjaminiHochberg`. Source: from memory. Cost: m log m.
 */
export function benjaminiYekutieli(logPs: readonly number[], level: number): boolean[] {
  requireFraction('level', level);
  return benjaminiHochberg(
    logPs,
    logPs.length === 0 ? level : level / harmonicNumber(logPs.length),
  );
}
