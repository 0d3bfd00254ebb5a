/** Keeps exp() and a sum of a million of them inside a double. */
const MAX_EXPONENT = 600;

/** sum x exp(scale): many logarithms added up without rounding each time. Starts empty. */
export interface LogSum {
  scale: number;
  sum: number;
}

/** A sum of nothing. */
export function emptyLogSum(): LogSum {
  return { scale: -Infinity, sum: 0 };
}

/** Adds exp(log) to the sum, in place; -Infinity adds nothing. */
export function addLog(total: LogSum, log: number): void {
  if (log === -Infinity) return;
  if (log <= total.scale + MAX_EXPONENT) {
    total.sum += Math.exp(log - total.scale);
    return;
  }
  total.sum = total.sum === 0 ? 1 : total.sum * Math.exp(total.scale - log) + 1;
  total.scale = log;
}

/** log of what was added up; -Infinity for nothing. */
export function logOfSum(total: LogSum): number {
  return total.sum === 0 ? -Infinity : total.scale + Math.log(total.sum);
}
