/**
 * Which tests the step-up procedure of Benjamini & Hochberg (1995) rejects, on the log scale.
 *
 * With p sorted ascending and k the largest i with p_(i) <= level i/m, rejects the k smallest.
 * In: natural logarithms of p-values (<= 0, -Infinity allowed), level in [0, 1]. Out: one
 * boolean a test, in the order given; equal p-values always share one decision.
 * Refuses other input with RangeError. Cost: m log m.
 */
export function benjaminiHochberg(logPs: readonly number[], level: number): boolean[] {
  if (!(level >= 0 && level <= 1)) {
    throw new RangeError(`level: must lie between 0 and 1, got ${level}`);
  }
  logPs.forEach((logP, index) => {
    if (!(logP <= 0)) throw new RangeError(`logPs[${index}]: must be <= 0, got ${logP}`);
  });
  const sorted = [...logPs].sort((a, b) => (a === b ? 0 : a < b ? -1 : 1));
  let cut: number | undefined;
  sorted.forEach((logP, index) => {
    if (logP <= Math.log((level * (index + 1)) / logPs.length)) cut = logP;
  });
  const limit = cut;
  return logPs.map((logP) => limit !== undefined && logP <= limit);
}
