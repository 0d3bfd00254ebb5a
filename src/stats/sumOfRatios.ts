const MAX_TERMS = 10_000_000;
const EPSILON = 1e-17;

/** A series 1 + r(0) + r(0) r(1) + ... of positive terms, described by its ratios. */
export interface RatioSeries {
  /** How many terms there are; Infinity when it never ends. */
  readonly terms: number;
  readonly ratio: (j: number) => number;
  /** A bound on r(j), r(j+1), ...; at 1 or more it does not yet end the sum. */
  readonly ceiling: (j: number) => number;
}

/**
 * The sum of such a series: a tail in units of its first mass.
 *
 * Stops when the geometric bound on what is left falls below 1e-17 of the sum; compensated
 * (Neumaier 1974, from memory), so that millions of terms round like one. Out: >= 1.
 * Throws RangeError naming `argument` after ten million terms.
 */
export function sumOfRatios(series: RatioSeries, argument: string): number {
  let [term, total, lost] = [1, 1, 0];
  for (let j = 0; j + 1 < series.terms; j += 1) {
    if (j === MAX_TERMS) {
      throw new RangeError(`${argument}: its tail has more than ${MAX_TERMS} terms that count`);
    }
    term *= series.ratio(j);
    const next = total + term;
    lost += total >= term ? total - next + term : term - next + total;
    total = next;
    const most = series.ceiling(j + 1);
    if (term * most <= EPSILON * total * (1 - most)) break;
  }
  return total + lost;
}
