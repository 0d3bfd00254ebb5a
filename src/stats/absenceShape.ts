import { requireCounts, requireLength } from './preconditions.js';

/**
 * The shape k of a gamma-Poisson strand: how much its hourly counts vary beyond chance.
 *
 * One k for all hours, from the excess of their variances: k = sum_h max(0, m_h^2 - s2_h/n_h) /
 * sum_h (s2_h - m_h), m_h^2 being freed of its own sampling error. Small k: bursts and silences are
 * ordinary. Infinity (counts vary no more than Poisson's do): an hour is empty with exp(-m_h).
 *
 * In: for each hour of the cycle the mean >= 0, the variance >= 0 and the number n_h >= 1 of the
 * baseline's counts. Out: k in [0, Infinity]. Refuses other input with RangeError.
 * Source: moments of the negative binomial, Anscombe (1950, from memory); pooling own.
 */
export function absenceShape(input: {
  readonly means: readonly number[];
  readonly variances: readonly number[];
  readonly days: readonly number[];
}): number {
  const { means, variances, days } = input;
  requireCounts('means', means);
  requireLength('variances', variances, means.length);
  requireCounts('variances', variances);
  requireLength('days', days, means.length);
  let signal = 0;
  let excess = 0;
  means.forEach((mean, hour) => {
    const n = days[hour] ?? 0;
    if (!(n >= 1 && n < Infinity)) {
      throw new RangeError(`days[${hour}]: must be a finite number >= 1, got ${n}`);
    }
    const variance = variances[hour] ?? 0;
    signal += Math.max(0, mean * mean - variance / n);
    excess += variance - mean;
  });
  return excess > 0 ? signal / excess : Infinity;
}
