import { requireLength, requireTable } from './preconditions.js';
import { sum } from './sum.js';

export interface Decomposition {
  /** Share after less share before, a category. */
  readonly delta: readonly number[];
  /** The part of it that comes from traffic moving between splits. */
  readonly between: readonly number[];
  /** The part that comes from the mixes inside the splits. */
  readonly within: readonly number[];
  /** What each split adds to `within`: splits x categories. */
  readonly withinSplits: readonly (readonly number[])[];
}

/**
 * How much of a change of shares is traffic, and how much happened inside the splits.
 *
 * With traffic shares pi_s and shares within m_ks, 0 before and 1 after:
 * between_k = sum_s (pi1_s - pi0_s)(m0_ks + m1_ks)/2 and
 * within_k = sum_s (pi0_s + pi1_s)/2 (m1_ks - m0_ks), so that delta = between + within exactly,
 * and each sums to 0 over the categories. A split absent on one side keeps the mix of the other:
 * all it does is traffic. Describes, and tests nothing.
 * In: two tables of counts >= 0 (effective events are welcome), splits x categories, of one
 * shape; each side with an event. Out: differences of shares, -1..1, see `Decomposition`.
 * Refuses other input with RangeError. Source: Kitagawa (1955), from memory. Cost: linear.
 */
export function kitagawa(input: {
  readonly before: readonly (readonly number[])[];
  readonly after: readonly (readonly number[])[];
}): Decomposition {
  const { before, after } = input;
  requireTable('before', before);
  requireTable('after', after);
  requireLength('after', after, before.length);
  const columns = before[0]?.length ?? 0;
  requireLength('after[0]', after[0] ?? [], columns);
  const traffic = { before: shares('before', before), after: shares('after', after) };
  const between = new Array<number>(columns).fill(0);
  const within = [...between];
  const withinSplits = before.map((row, s) => {
    const [from, to] = mixes(row, after[s] ?? []);
    const [pi0, pi1] = [traffic.before[s] ?? 0, traffic.after[s] ?? 0];
    return from.map((m0, k) => {
      const m1 = to[k] ?? 0;
      const inside = ((pi0 + pi1) / 2) * (m1 - m0);
      between[k] = (between[k] ?? 0) + ((pi1 - pi0) * (m0 + m1)) / 2;
      within[k] = (within[k] ?? 0) + inside;
      return inside;
    });
  });
  const delta = between.map((value, k) => value + (within[k] ?? 0));
  return { delta, between, within, withinSplits };
}

/** Each split's share of the events of one side. */
function shares(name: string, table: readonly (readonly number[])[]): number[] {
  const totals = table.map(sum);
  const whole = sum(totals);
  if (whole === 0) throw new RangeError(`${name}: must hold an event, got none`);
  return totals.map((total) => total / whole);
}

/** The mix of a split before and after; an absent one is taken as the other. */
function mixes(before: readonly number[], after: readonly number[]): [number[], number[]] {
  const hadBefore = sum(before) > 0 ? before : after;
  const hadAfter = sum(after) > 0 ? after : before;
  const mix = (row: readonly number[]): number[] => {
    const total = sum(row);
    return row.map((x) => (total > 0 ? x / total : 0));
  };
  return [mix(hadBefore), mix(hadAfter)];
}
