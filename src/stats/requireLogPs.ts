import { requireLogP } from './requireLogP.js';

/** Refuses logarithms of p-values that are above 0 or not a number; -Infinity is welcome. */
export function requireLogPs(logPs: readonly number[]): void {
  logPs.forEach((logP, index) => {
    requireLogP(`logPs[${index}]`, logP);
  });
}
