import { logPoissonMass } from './logPoissonMass.js';

/** Terms this far (in logs) under the greatest are left out: e^-48 is 1.4e-21. */
const DROP = 48;
const MAX_TERMS = 10_000_000;
/** Where a double still tells whole numbers, and their neighbours' terms, apart. */
const LARGEST = 2 ** 40;

/**
 * A family of central distributions, one for each j = 0, 1, ..., whose upper tail at a fixed
 * point grows with j by a known step.
 */
export interface CentralFamily {
  readonly logUpper: (j: number) => number;
  readonly logLower: (j: number) => number;
  /** log of upper(j+1) - upper(j), which is also lower(j) - lower(j+1). */
  readonly logStep: (j: number) => number;
  /** step(j+1) / step(j). */
  readonly stepRatio: (j: number) => number;
}

/** The terms of a mixture that count. */
interface Span {
  readonly from: number;
  readonly to: number;
  /** Greatest log term, which the others are scaled by. */
  readonly greatest: number;
}

/**
 * log of sum_j Poisson(j; mean) upper(j).
 *
 * From the smallest j that counts upwards, each tail being the one before plus a step, so that
 * only positive numbers are added (idea: Benton & Krishnamoorthy 2003, from memory, who start at
 * the mode and subtract on one side). In: mean > 0. Throws RangeError when over ten million terms
 * count. Cost: about 14 standard deviations of steps, and two central tails for each bisection
 * that finds where they begin and end.
 */
export function poissonMixtureLogUpper(mean: number, family: CentralFamily): number {
  const { from, to, greatest } = findSpan(mean, family.logUpper);
  const weight = logPoissonMass(from, mean) - greatest;
  let term = Math.exp(weight + family.logUpper(from));
  let step = Math.exp(weight + family.logStep(from));
  let total = term;
  for (let j = from; j < to; j += 1) {
    const shrink = mean / (j + 1);
    term = (term + step) * shrink;
    step *= family.stepRatio(j) * shrink;
    total += term;
  }
  return greatest + Math.log(total);
}

/** log of sum_j Poisson(j; mean) lower(j): the same downwards, where lower tails grow. */
export function poissonMixtureLogLower(mean: number, family: CentralFamily): number {
  const { from, to, greatest } = findSpan(mean, family.logLower);
  const weight = logPoissonMass(to, mean) - greatest;
  let term = Math.exp(weight + family.logLower(to));
  let step = Math.exp(weight + family.logStep(to));
  let total = term;
  for (let j = to; j > from; j -= 1) {
    const shrink = j / mean;
    step *= shrink / family.stepRatio(j - 1);
    term = term * shrink + step;
    total += term;
  }
  return greatest + Math.log(total);
}

/** Log terms rise to one peak and fall again: find it, and where they are DROP below it. */
function findSpan(mean: number, logTail: (j: number) => number): Span {
  const log = (j: number): number => logPoissonMass(j, mean) + logTail(j);
  const peak = firstWhere((j) => !(log(j + 1) > log(j)), 0);
  if (peak === Infinity) throw tooMany(mean);
  const greatest = log(peak);
  const counts = (j: number): boolean => log(j) >= greatest - DROP;
  const to = firstWhere((j) => !counts(j + 1), peak);
  const from = counts(0) ? 0 : bisect((j) => counts(j), 0, peak);
  if (to - from > MAX_TERMS) throw tooMany(mean);
  return { from, to, greatest };
}

function tooMany(mean: number): RangeError {
  const where = `at ${2 * mean}, this far in the tail`;
  return new RangeError(`lambda: ${where}, more than ${MAX_TERMS} terms count`);
}

/** The first whole number from `start` on where `holds`, which never stops once it began. */
function firstWhere(holds: (j: number) => boolean, start: number): number {
  if (holds(start)) return start;
  let [last, width] = [start, 1];
  while (!holds(last + width)) {
    last += width;
    width *= 2;
    if (width > LARGEST) return Infinity;
  }
  return bisect(holds, last, last + width);
}

/** The first in (before, at] where `holds`, given that it does at `at` and not at `before`. */
function bisect(holds: (j: number) => boolean, before: number, at: number): number {
  let [lo, hi] = [before, at];
  while (hi - lo > 1) {
    const middle = Math.floor(lo + (hi - lo) / 2);
    if (holds(middle)) hi = middle;
    else lo = middle;
  }
  return hi;
}
