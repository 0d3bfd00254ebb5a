import type { MetricsSnapshot } from '../../../src/serve/snapshot.js';
import type { Verdict } from '../../../src/terms/verdict.js';
import { sampleAlert, sampleEvidence, startMs } from '../send/samples.js';

/** A daemon that has just been started on an empty store. */
export function emptySnapshot(changes: Partial<MetricsSnapshot> = {}): MetricsSnapshot {
  return {
    mixes: [],
    senders: [],
    totals: {
      accepted: new Map(),
      rejected: [],
      mixes: new Map(),
      verdicts: [],
      deliveries: [],
    },
    latestVerdicts: [],
    alerts: [],
    judgedToMs: new Map(),
    collectors: [],
    lastRoundMs: null,
    budgetSpentRatio: null,
    storeBytes: 4096,
    ...changes,
  };
}

export function sampleVerdict(changes: Partial<Verdict> = {}): Verdict {
  return {
    mix: 'gateway-outcomes',
    strand: 'region=north',
    window: { startMs, endMs: startMs + 300_000 },
    verdict: 'steady',
    events: 1000,
    reason: 'no shift shown',
    evidence: sampleEvidence(),
    configDigest: 'sha256:00',
    version: '0.1.0',
    ...changes,
  };
}

/** Every family has samples; the names are whatever is given. */
export function fullSnapshot(name: (plain: string) => string): MetricsSnapshot {
  const mix = name('gateway-outcomes');
  const strand = `region=${name('north')}`;
  return emptySnapshot({
    mixes: [mix],
    senders: [name('oncall')],
    totals: {
      accepted: new Map([[name('gateway'), 12]]),
      rejected: [{ collector: name('gateway'), reason: name('no time'), count: 2 }],
      mixes: new Map([
        [mix, { events: 10, late: 1, categories: new Map([[name('approved'), 10]]) }],
      ]),
      verdicts: [{ mix, verdict: 'steady', count: 4 }],
      deliveries: [{ sender: name('oncall'), outcome: 'delivered', count: 1 }],
    },
    latestVerdicts: [sampleVerdict({ mix, strand })],
    alerts: [sampleAlert({ mix, strand })],
    judgedToMs: new Map([[mix, startMs + 300_000]]),
    collectors: [{ name: name('gateway'), watermarkMs: startMs + 500, lagBytes: 17 }],
    lastRoundMs: startMs + 301_500,
    budgetSpentRatio: 0.25,
  });
}
