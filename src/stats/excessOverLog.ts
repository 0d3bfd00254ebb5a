/**
 * d - log(1 + d), for d > -1: zero at zero, positive elsewhere.
 *
 * With r = d/(2 + d), log(1 + d) = 2 atanh(r) and d - 2r = rd, so that near zero the
 * difference comes out of a series instead of a subtraction (idea: Loader 2000, from memory).
 * `onePlus` may carry 1 + d where the caller knows it better than 1 + d rounds to.
 */
export function excessOverLog(d: number, onePlus: number = 1 + d): number {
  if (Math.abs(d) > 0.4) return d - Math.log(onePlus);
  const r = d / (2 + d);
  const u = r * r;
  let sum = 0;
  // |r| <= 1/4, so u^14 is under 2^-56.
  for (let n = 29; n >= 3; n -= 2) sum = u * (1 / n + sum);
  return r * d - 2 * r * sum;
}
