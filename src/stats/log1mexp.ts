/**
 * log(1 - exp(x)) for x <= 0, without the loss either naive form has at one end.
 *
 * Switches at log 2 as Maechler (2012, "Accurately computing log(1 - exp(-|a|))", from memory).
 * Gives -Infinity at 0 and NaN for x > 0.
 */
export function log1mexp(x: number): number {
  return x > -Math.LN2 ? Math.log(-Math.expm1(x)) : Math.log1p(-Math.exp(x));
}
