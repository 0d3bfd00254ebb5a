import type { Alert } from '../../../src/terms/alert.js';
import type { Evidence } from '../../../src/terms/evidence.js';
import type { Message } from '../../../src/terms/message.js';
import type { Partition } from '../../../src/terms/partition.js';
import type { StrandMemory } from '../../../src/terms/recipe.js';
import type { RoundCommit } from '../../../src/terms/round.js';
import type { Count, Tally } from '../../../src/terms/tally.js';
import type { Verdict } from '../../../src/terms/verdict.js';
import type { CountBatch } from '../../../src/store/store.js';

/** Invented values of every kind that a store keeps, with what a test wants changed. */

export const MINUTE = 60_000;
/** Some midnight in UTC. */
export const T0 = Date.UTC(2031, 2, 5);

export async function listOf<T>(values: AsyncIterable<T>): Promise<T[]> {
  const list: T[] = [];
  for await (const value of values) list.push(value);
  return list;
}

type Numbers = Readonly<Record<string, number | readonly [onTime: number, late: number]>>;

export function countsOf(numbers: Numbers): Map<string, Count> {
  const entries = Object.entries(numbers).map(([category, given]): [string, Count] => {
    const [onTime, late] = typeof given === 'number' ? [given, 0] : given;
    return [category, { onTime, late }];
  });
  return new Map(entries);
}

/** A tally of the one-minute window number `at` of mix `m`, strand `all`. */
export function tally(at: number, numbers: Numbers, changed: Partial<Tally> = {}): Tally {
  const window = { startMs: T0 + at * MINUTE, endMs: T0 + (at + 1) * MINUTE };
  return { mix: 'm', strand: 'all', window, counts: countsOf(numbers), ...changed };
}

export function batchOf(tallies: readonly Tally[], changed: Partial<CountBatch> = {}): CountBatch {
  return { tallies, partitions: [], rejected: [], accepted: [], ...changed };
}

export function partition(id: string, changed: Partial<Partition> = {}): Partition {
  return {
    collector: 'gate',
    id,
    name: `var/log/${id}.ndjson`,
    position: 0,
    insideLongLine: false,
    fingerprint: null,
    firstMs: null,
    watermarkMs: null,
    ended: false,
    quietSinceMs: null,
    waiting: null,
    ...changed,
  };
}

const chiSquared = { statistic: 12.5, df: 2, p: 0.0019304541362277093, logP: -6.25 };

/** Odd on purpose: a log p of minus infinity, and no second degrees of freedom. */
export const evidence: Evidence = {
  method: 'g2-f',
  statistic: Infinity,
  df: 2,
  df2: null,
  p: 0,
  logP: -Infinity,
  rho: 0.001,
  pearson: chiSquared,
  g2: chiSquared,
  table: {
    rows: ['before', 'now'],
    categories: ['ok', 'füllt'],
    observed: [
      [90, 10],
      [70, 30],
    ],
    expected: [
      [80, 20],
      [80, 20],
    ],
  },
  pooled: [],
  moved: { estimate: 0.2, atLeast: 0.08, atMost: 0.32 },
  cramersV: 0.25,
  cohensW: 0.25,
  movers: [],
  reference: {
    yardstick: 'baseline',
    windows: 40,
    events: 4000,
    fromMs: T0 - 40 * MINUTE,
    toMs: T0,
    provisional: null,
  },
  weightNow: 91.5,
  weightReference: null,
  theta: 1,
  rawLogP: -Infinity,
  threshold: 1e-5,
  logThreshold: -11.512925464970229,
  tolerance: 0.01,
};

export function verdict(at: number, changed: Partial<Verdict> = {}): Verdict {
  return {
    mix: 'm',
    strand: 'all',
    window: { startMs: T0 + at * MINUTE, endMs: T0 + (at + 1) * MINUTE },
    verdict: 'steady',
    events: 100,
    reason: 'no shift shown',
    evidence: null,
    configDigest: 'digest-1',
    version: '0.1.0',
    ...changed,
  };
}

export function alert(id: string, changed: Partial<Alert> = {}): Alert {
  return {
    id,
    continues: null,
    mix: 'm',
    strand: 'all',
    kind: 'shift',
    provisional: false,
    state: 'unacknowledged',
    raisedAtMs: T0 + MINUTE,
    window: { startMs: T0, endMs: T0 + MINUTE },
    since: { estimateMs: T0, earliestMs: T0, latestMs: T0 },
    ended: null,
    sentence: 'm has shifted: “füllt” 10 % → 30 %',
    evidence,
    where: null,
    history: [{ atMs: T0 + MINUTE, event: 'raised', note: '' }],
    ...changed,
  };
}

export function message(id: string, changed: Partial<Message> = {}): Message {
  const alerts = [alert('a1')];
  const summary = 'm has shifted';
  return { id, sender: 'oncall', event: 'raised', createdAtMs: T0, summary, alerts, ...changed };
}

export const memory: StrandMemory = {
  epochMs: T0,
  excluded: [{ fromMs: T0, toMs: T0 + MINUTE }],
  firstMs: T0,
  lastMs: T0 + MINUTE,
  recipe: { step: 3, fromMs: T0, toMs: T0 + MINUTE, excluded: [] },
  alarm: null,
  former: null,
  returnedAlertId: null,
};

/** The round that ends with window `at`, of mix `m`; empty but for what is given. */
export function round(at: number, changed: Partial<RoundCommit> = {}): RoundCommit {
  const families = [{ budget: '', expected: 2, tested: 1, level: 1e-5, spent: 1e-5 }];
  return {
    batch: { endMs: T0 + (at + 1) * MINUTE, number: 0, mixes: ['m'], families },
    verdicts: [],
    strands: [],
    forgotten: [],
    alerts: [],
    messages: [],
    digestEntries: [],
    ...changed,
  };
}
