// From this argument up the series below is exact to a double (first term left out: 3e-18).
const SERIES_FROM = 15;

/**
 * What Stirling's formula leaves out: log Gamma(x) - [(x - 1/2) log x - x + log(2 pi)/2], x > 0.
 *
 * Carrying this small difference, instead of differences of large log-gammas, is what keeps
 * tails exact for large degrees of freedom (Loader 2000, "Fast and accurate computation of
 * binomial probabilities", from memory). Series: Abramowitz & Stegun 6.1.41 (from memory).
 * Below 15 the argument is stepped up by the recurrence of Gamma.
 */
export function stirlingError(x: number): number {
  let at = x;
  let stepped = 0;
  while (at < SERIES_FROM) {
    stepped += stepError(at);
    at += 1;
  }
  const u = 1 / (at * at);
  const tail = 1 / 1680 - u * (1 / 1188 - (u * 691) / 360360);
  return stepped + (1 / 12 - u * (1 / 360 - u * (1 / 1260 - u * tail))) / at;
}

/** stirlingError(x) - stirlingError(x + 1) = (x + 1/2) log(1 + 1/x) - 1. */
function stepError(x: number): number {
  const r = 1 / (2 * x + 1);
  if (r > 0.2) return (x + 0.5) * Math.log1p(1 / x) - 1;
  // atanh(r)/r - 1 by its series: all terms positive, nothing cancels.
  const u = r * r;
  let sum = 0;
  for (let n = 25; n >= 3; n -= 2) sum = u * (1 / n + sum);
  return sum;
}
