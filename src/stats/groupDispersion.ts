import { designWeight } from './designWeight.js';
import { requireTable } from './preconditions.js';
import { solveRho } from './solveRho.js';
import { sum } from './sum.js';

const ALTERNATIONS = 2;

/** Windows of one group: those that share one set of shares. */
interface Group {
  readonly windows: readonly (readonly number[])[];
  readonly events: readonly number[];
  /** sum_k x log(x/N) of each window: does not depend on the pooled shares. */
  readonly ownLogs: readonly number[];
}

export interface GroupDispersion {
  readonly rho: number;
  /** For each group: pooled shares and each window's weight (0 for a window without events). */
  readonly groups: readonly { readonly shares: number[]; readonly weights: number[] }[];
  readonly df2: number;
}

/**
 * One intra-window correlation for several groups of windows, each around its own shares:
 * sum_g sum_b G_gb / (1 + (N_gb - 1) rho) = sum_g (B_g - 1)(K - 1).
 *
 * The heart of `estimateDispersion` (one group) and `dispersionOfSlots`. Weights start at N and
 * alternate twice with rho; with equal N in each group the shares cannot change, so once is
 * enough. Windows without events are ignored; a group with fewer than 2 others adds nothing.
 * Cost: 2 logarithms a window and category, then additions only.
 */
export function groupDispersion(
  tables: readonly (readonly (readonly number[])[])[],
): GroupDispersion {
  tables.forEach((table, g) => {
    if (table.length > 0) requireTable(`windows of group ${g}`, table);
  });
  const groups = tables.map(prepare);
  const width = tables.find((table) => table.length > 0)?.[0]?.length ?? 0;
  const df2 = groups.reduce((df, group) => df + degrees(group, width), 0);
  const alternations = groups.every(hasEqualEvents) ? 1 : ALTERNATIONS;
  let rho = 0;
  for (let step = 0; step < alternations && df2 > 0; step += 1) {
    const deviances = groups.flatMap((group) => groupDeviances(group, rho, width));
    rho = solveRho((at) => discounted(deviances, at), df2);
  }
  const described = groups.map((group) => ({
    shares: pooledShares(group, rho, width),
    weights: group.events.map((events) => designWeight(events, rho)),
  }));
  return { rho, groups: described, df2 };
}

interface Deviance {
  readonly events: number;
  readonly deviance: number;
}

function prepare(windows: readonly (readonly number[])[]): Group {
  const events = windows.map(sum);
  const ownLogs = windows.map((window, b) => {
    const total = events[b] ?? 0;
    return window.reduce((logs, x) => (x > 0 ? logs + x * Math.log(x / total) : logs), 0);
  });
  return { windows, events, ownLogs };
}

function degrees(group: Group, width: number): number {
  const filled = group.events.filter((events) => events > 0).length;
  return Math.max(0, filled - 1) * Math.max(0, width - 1);
}

function hasEqualEvents(group: Group): boolean {
  const filled = group.events.filter((events) => events > 0);
  return filled.every((events) => events === filled[0]);
}

/** p_k = sum_b w_b r_bk / W; all 0 for a group without events. */
function pooledShares(group: Group, rho: number, width: number): number[] {
  const shares = new Array<number>(width).fill(0);
  let weight = 0;
  group.windows.forEach((window, b) => {
    const events = group.events[b] ?? 0;
    if (events === 0) return;
    const each = designWeight(events, rho) / events;
    weight += each * events;
    for (let k = 0; k < width; k += 1) shares[k] = (shares[k] ?? 0) + each * (window[k] ?? 0);
  });
  return weight > 0 ? shares.map((share) => share / weight) : shares;
}

/** G_b = 2 (sum_k x log(x/N) - sum_k x log p_k) of every window that has events. */
function groupDeviances(group: Group, rho: number, width: number): Deviance[] {
  // A share of 0 means no window has the category: its x is 0 everywhere, its log never counts.
  const logs = pooledShares(group, rho, width).map((share) => (share > 0 ? Math.log(share) : 0));
  const found: Deviance[] = [];
  group.windows.forEach((window, b) => {
    const events = group.events[b] ?? 0;
    if (events === 0) return;
    let cross = 0;
    for (let k = 0; k < width; k += 1) cross += (window[k] ?? 0) * (logs[k] ?? 0);
    found.push({ events, deviance: Math.max(0, 2 * ((group.ownLogs[b] ?? 0) - cross)) });
  });
  return found;
}

function discounted(deviances: readonly Deviance[], rho: number): number {
  let total = 0;
  for (const { events, deviance } of deviances) total += deviance / (1 + (events - 1) * rho);
  return total;
}
