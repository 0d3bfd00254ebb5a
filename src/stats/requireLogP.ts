/** Refuses anything but the natural log of a p-value; -Infinity is one. */
export function requireLogP(name: string, logP: number): void {
  if (!(logP <= 0)) throw new RangeError(`${name}: must be <= 0, got ${logP}`);
}
