/** log(exp(a) + exp(b)) for logarithms of any size; -Infinity stands for zero. */
export function logAddExp(a: number, b: number): number {
  const greater = Math.max(a, b);
  if (greater === -Infinity) return -Infinity;
  return greater + Math.log1p(Math.exp(Math.min(a, b) - greater));
}
