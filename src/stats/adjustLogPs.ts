import { harmonicNumber } from './harmonicNumber.js';
import { requireLogPs } from './requireLogPs.js';

export type Adjustment = 'holm' | 'benjamini-hochberg' | 'benjamini-yekutieli';

/**
 * Adjusted p-values: for each test the least level at which the procedure rejects it.
 *
 * With p sorted ascending: Holm (1979), the running maximum of (m - i + 1) p_(i); Benjamini &
 * Hochberg (1995), the running minimum from the largest down of m p_(i) / i; Benjamini &
 * Yekutieli (2001), the same times 1 + 1/2 + ... + 1/m; each capped at 1. All from memory.
 * In: natural logarithms of p-values (<= 0, -Infinity allowed). Out: natural logarithms of the
 * adjusted ones, in the order given. Refuses other input with RangeError. Cost: m log m.
 */
export function adjustLogPs(logPs: readonly number[], method: Adjustment): number[] {
  requireLogPs(logPs);
  const m = logPs.length;
  const value = (i: number): number => logPs[i] ?? 0;
  const order = [...logPs.keys()].sort((a, b) =>
    value(a) === value(b) ? a - b : value(a) < value(b) ? -1 : 1,
  );
  const adjusted = logPs.map(() => 0);
  if (method === 'holm') {
    let greatest = -Infinity;
    order.forEach((test, rank) => {
      greatest = Math.max(greatest, Math.min(0, value(test) + Math.log(m - rank)));
      adjusted[test] = greatest;
    });
    return adjusted;
  }
  const factor = method === 'benjamini-yekutieli' ? m * harmonicNumber(m) : m;
  let least = 0;
  for (let rank = m; rank >= 1; rank -= 1) {
    const test = order[rank - 1] ?? 0;
    least = Math.min(least, value(test) + Math.log(factor / rank));
    adjusted[test] = least;
  }
  return adjusted;
}
