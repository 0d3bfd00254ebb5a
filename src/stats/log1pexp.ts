/** log(1 + exp(x)) for any x, without overflow; 0 at -Infinity. */
export function log1pexp(x: number): number {
  return x > 0 ? x + Math.log1p(Math.exp(-x)) : Math.log1p(Math.exp(x));
}
