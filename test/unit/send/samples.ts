import type { SenderConfig } from '../../../src/config/types.js';
import type { Alert } from '../../../src/terms/alert.js';
import type { Evidence } from '../../../src/terms/evidence.js';
import type { Message } from '../../../src/terms/message.js';

/** 2026-03-01T00:00:00Z, the start of the invented scenario. */
export const startMs = Date.UTC(2026, 2, 1);
const minuteMs = 60_000;

/** Evidence of an invented window; the numbers are plausible, not computed. */
export function sampleEvidence(changes: Partial<Evidence> = {}): Evidence {
  return {
    method: 'g2-f',
    statistic: 12.5,
    df: 2,
    df2: 40,
    p: 0.0001,
    logP: Math.log(0.0001),
    rho: 0.001,
    pearson: { statistic: 30, df: 2, p: 1e-7, logP: Math.log(1e-7) },
    g2: { statistic: 31, df: 2, p: 1e-7, logP: Math.log(1e-7) },
    table: {
      rows: ['reference', 'window'],
      categories: ['approved', 'declined'],
      observed: [
        [900, 100],
        [850, 150],
      ],
      expected: [
        [875, 125],
        [875, 125],
      ],
    },
    pooled: [],
    moved: { estimate: 0.05, atLeast: 0.02, atMost: 0.08 },
    cramersV: 0.1,
    cohensW: 0.1,
    movers: [],
    reference: {
      yardstick: 'baseline',
      windows: 24,
      events: 24_000,
      fromMs: startMs - 3_600_000,
      toMs: startMs,
      provisional: null,
    },
    weightNow: 900,
    weightReference: 20_000,
    theta: 1,
    rawLogP: Math.log(0.0001),
    threshold: 0.001,
    logThreshold: Math.log(0.001),
    tolerance: 0.01,
    ...changes,
  };
}

export function sampleAlert(changes: Partial<Alert> = {}): Alert {
  const window = { startMs, endMs: startMs + 5 * minuteMs };
  return {
    id: 'alert-1',
    continues: null,
    mix: 'gateway-outcomes',
    strand: 'region=north',
    kind: 'shift',
    provisional: false,
    state: 'unacknowledged',
    raisedAtMs: window.endMs,
    window,
    since: {
      estimateMs: startMs,
      earliestMs: startMs - 5 * minuteMs,
      latestMs: startMs,
    },
    ended: null,
    sentence: 'gateway-outcomes in north shifted: declined rose from 10 % to 15 %',
    evidence: sampleEvidence(),
    where: null,
    history: [{ atMs: window.endMs, event: 'raised', note: '' }],
    ...changes,
  };
}

export function sampleMessage(changes: Partial<Message> = {}): Message {
  return {
    id: 'message-1',
    sender: 'oncall',
    event: 'raised',
    createdAtMs: startMs,
    summary: 'gateway-outcomes in north shifted',
    alerts: [sampleAlert()],
    ...changes,
  };
}

export function sampleSender(changes: Partial<SenderConfig> = {}): SenderConfig {
  return {
    name: 'oncall',
    webhook: 'http://127.0.0.1:9/hook',
    secret: null,
    freshMs: 15 * minuteMs,
    digestMs: 60 * minuteMs,
    ...changes,
  };
}
