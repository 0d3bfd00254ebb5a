/** Refuses logarithms of p-values that are above 0 or not a number; -Infinity is welcome. */
export function requireLogPs(logPs: readonly number[]): void {
  logPs.forEach((logP, index) => {
    if (!(logP <= 0)) throw new RangeError(`logPs[${index}]: must be <= 0, got ${logP}`);
  });
}
