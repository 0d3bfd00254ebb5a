import { logGamma } from './logGamma.js';

/** log of "n choose k", for whole 0 <= k <= n. */
export function logChoose(n: number, k: number): number {
  if (k === 0 || k === n) return 0;
  return logGamma(n + 1) - logGamma(k + 1) - logGamma(n - k + 1);
}
