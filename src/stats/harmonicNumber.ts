/** 1 + 1/2 + ... + 1/n for whole n >= 0; 0 for none. Smallest terms first. Cost: n. */
export function harmonicNumber(n: number): number {
  let total = 0;
  for (let i = n; i >= 1; i -= 1) total += 1 / i;
  return total;
}
