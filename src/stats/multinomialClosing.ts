import { addLog, emptyLogSum, logOfSum } from './logSum.js';
import type { LogSum } from './logSum.js';
import type { MultinomialStage } from './multinomialStages.js';

/**
 * Fills the last two bins of a multinomial outcome with `left` events, all ways at once.
 *
 * Out: a function that adds exp(log) times the probability of all ways whose distance is at
 * least `limit`. The distance is convex along the ways, so those under the limit are an interval
 * around its least, found by bisection; the two tails outside it were summed beforehand, each
 * from its own end, so that nothing is got by subtraction.
 * Cost: left + 1 once, log(left) a call.
 */
export function multinomialClosing(
  [one, two]: readonly [MultinomialStage, MultinomialStage],
  left: number,
): (counted: LogSum, log: number, limit: number) => void {
  const costAt = (x: number): number => (one.cost[x] ?? 0) + (two.cost[left - x] ?? 0);
  const logAt = (x: number): number => (one.log[x] ?? 0) + (two.log[left - x] ?? 0);
  const below = runningLogs(left, logAt);
  const above = runningLogs(left, (x) => logAt(left - x));
  const centre = firstWhere(0, left, (x) => costAt(x + 1) >= costAt(x));
  return (counted, log, limit) => {
    if (costAt(centre) >= limit) {
      addLog(counted, log + (below[left] ?? 0));
      return;
    }
    const from = firstWhere(0, centre, (x) => costAt(x) < limit);
    const to = firstWhere(centre, left + 1, (x) => x > left || costAt(x) >= limit);
    if (from > 0) addLog(counted, log + (below[from - 1] ?? 0));
    if (to <= left) addLog(counted, log + (above[left - to] ?? 0));
  };
}

/** logs of the running sums of exp(value(0)), exp(value(1)), ... */
function runningLogs(last: number, value: (x: number) => number): Float64Array {
  const total = emptyLogSum();
  return Float64Array.from({ length: last + 1 }, (_, x) => {
    addLog(total, value(x));
    return logOfSum(total);
  });
}

/** The first whole number in [from, to] that passes, by bisection; `to` if none before does. */
function firstWhere(from: number, to: number, passes: (x: number) => boolean): number {
  let [low, high] = [from, to];
  while (low < high) {
    const middle = Math.floor((low + high) / 2);
    if (passes(middle)) high = middle;
    else low = middle + 1;
  }
  return low;
}
