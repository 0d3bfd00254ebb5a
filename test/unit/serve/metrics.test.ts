import { describe, expect, it } from 'vitest';

import { createMetrics } from '../../../src/serve/metrics.js';
import type { MetricsSnapshot } from '../../../src/serve/snapshot.js';
import { sampleAlert, sampleEvidence } from '../send/samples.js';
import { emptySnapshot, fullSnapshot, sampleVerdict } from './snapshots.js';

/** The families that contracts.md lists, with their types. */
const contract = [
  ['tallyward_events_total', 'counter'],
  ['tallyward_category_events_total', 'counter'],
  ['tallyward_rejected_total', 'counter'],
  ['tallyward_late_total', 'counter'],
  ['tallyward_windows_total', 'counter'],
  ['tallyward_alert_open', 'gauge'],
  ['tallyward_alerts', 'gauge'],
  ['tallyward_moved_ratio', 'gauge'],
  ['tallyward_moved_at_least_ratio', 'gauge'],
  ['tallyward_moved_at_most_ratio', 'gauge'],
  ['tallyward_window_end_timestamp_seconds', 'gauge'],
  ['tallyward_watermark_timestamp_seconds', 'gauge'],
  ['tallyward_collector_lag_bytes', 'gauge'],
  ['tallyward_last_round_timestamp_seconds', 'gauge'],
  ['tallyward_round_duration_seconds', 'histogram'],
  ['tallyward_false_alarm_budget_spent_ratio', 'gauge'],
  ['tallyward_store_bytes', 'gauge'],
  ['tallyward_deliveries_total', 'counter'],
] as const;

const openMetrics = 'application/openmetrics-text';

async function lines(snapshot: MetricsSnapshot, accept?: string): Promise<readonly string[]> {
  return (await createMetrics().render(snapshot, accept)).body.split('\n');
}

async function samplesOf(snapshot: MetricsSnapshot, name: string): Promise<readonly string[]> {
  const all = await lines(snapshot);
  return all.filter((line) => line.startsWith(`${name}{`) || line.startsWith(`${name} `));
}

describe('the families', () => {
  it('are all there, with help and type, before anything has happened', async () => {
    const text = await lines(emptySnapshot());
    for (const [name, type] of contract) {
      expect(text).toContain(`# TYPE ${name} ${type}`);
      expect(text.filter((line) => line.startsWith(`# HELP ${name} `))).toHaveLength(1);
    }
  });

  it('are named without _total in OpenMetrics while counters’ samples keep it', async () => {
    const text = await lines(
      fullSnapshot((plain) => plain),
      openMetrics,
    );
    expect(text).toContain('# TYPE tallyward_events counter');
    expect(text).toContain('tallyward_events_total{mix="gateway-outcomes"} 10');
    expect(text.slice(-2)).toEqual(['# EOF', '']);
  });

  it('come out the same when the other format was asked for in between', async () => {
    const metrics = createMetrics();
    const snapshot = fullSnapshot((plain) => plain);
    const first = await metrics.render(snapshot, undefined);
    const other = await metrics.render(snapshot, openMetrics);
    expect((await metrics.render(snapshot, undefined)).body).toBe(first.body);
    expect((await metrics.render(snapshot, openMetrics)).body).toBe(other.body);
    expect(other.body).not.toBe(first.body);
  });

  it('have the content type of the format that is sent', async () => {
    const metrics = createMetrics();
    const types = [undefined, openMetrics].map(
      async (accept) => (await metrics.render(emptySnapshot(), accept)).contentType,
    );
    // Prometheus exposition formats page and OpenMetrics 1.0, section "Overall Structure".
    expect(await Promise.all(types)).toEqual([
      'text/plain; version=0.0.4; charset=utf-8',
      'application/openmetrics-text; version=1.0.0; charset=utf-8',
    ]);
  });
});

describe('samples', () => {
  it('stand for the snapshot’s values', async () => {
    const text = await lines(fullSnapshot((plain) => plain));
    for (const line of [
      'tallyward_category_events_total{mix="gateway-outcomes",category="approved"} 10',
      'tallyward_rejected_total{collector="gateway",reason="no time"} 2',
      'tallyward_late_total{mix="gateway-outcomes"} 1',
      'tallyward_windows_total{mix="gateway-outcomes",verdict="steady"} 4',
      'tallyward_windows_total{mix="gateway-outcomes",verdict="left-out"} 0',
      'tallyward_moved_ratio{mix="gateway-outcomes",strand="region=north"} 0.05',
      'tallyward_moved_at_least_ratio{mix="gateway-outcomes",strand="region=north"} 0.02',
      'tallyward_moved_at_most_ratio{mix="gateway-outcomes",strand="region=north"} 0.08',
      // 2026-03-01T00:00:00Z is 1772323200 (`date -u -d 2026-03-01 +%s`).
      'tallyward_window_end_timestamp_seconds{mix="gateway-outcomes"} 1772323500',
      'tallyward_watermark_timestamp_seconds{collector="gateway"} 1772323200.5',
      'tallyward_collector_lag_bytes{collector="gateway"} 17',
      'tallyward_last_round_timestamp_seconds 1772323501.5',
      'tallyward_false_alarm_budget_spent_ratio 0.25',
      'tallyward_store_bytes 4096',
      'tallyward_deliveries_total{sender="oncall",outcome="delivered"} 1',
      'tallyward_deliveries_total{sender="oncall",outcome="gave-up"} 0',
      'tallyward_alerts{state="unacknowledged"} 1',
      'tallyward_alerts{state="returned"} 0',
    ]) {
      expect(text).toContain(line);
    }
  });

  it('are absent where nothing is known yet', async () => {
    const snapshot = emptySnapshot({
      collectors: [{ name: 'pipe', watermarkMs: null, lagBytes: null }],
    });
    for (const name of [
      'tallyward_watermark_timestamp_seconds',
      'tallyward_collector_lag_bytes',
      'tallyward_last_round_timestamp_seconds',
      'tallyward_false_alarm_budget_spent_ratio',
    ]) {
      expect(await samplesOf(snapshot, name)).toEqual([]);
    }
  });

  it('of moved vanish when the last window of the strand was not judged', async () => {
    for (const verdict of ['thin', 'silent', 'learning', 'left-out'] as const) {
      const snapshot = emptySnapshot({ latestVerdicts: [sampleVerdict({ verdict })] });
      expect(await samplesOf(snapshot, 'tallyward_moved_ratio')).toEqual([]);
    }
    for (const verdict of ['steady', 'shifted'] as const) {
      const snapshot = emptySnapshot({ latestVerdicts: [sampleVerdict({ verdict })] });
      expect(await samplesOf(snapshot, 'tallyward_moved_ratio')).toHaveLength(1);
    }
  });

  it('of open alerts are 1 in alarm, and 0 for returned alerts and quiet strands', async () => {
    const snapshot = emptySnapshot({
      latestVerdicts: ['a', 'b', 'c', 'd'].map((strand) => sampleVerdict({ strand })),
      alerts: [
        sampleAlert({ id: '1', strand: 'a', state: 'unacknowledged' }),
        sampleAlert({ id: '2', strand: 'b', state: 'acknowledged' }),
        sampleAlert({ id: '3', strand: 'c', state: 'returned', kind: 'impossible' }),
        sampleAlert({ id: '4', strand: 'a', state: 'returned' }),
      ],
    });
    const labels = (strand: string, kind: string): string =>
      `tallyward_alert_open{mix="gateway-outcomes",strand="${strand}",kind="${kind}"}`;
    expect(await samplesOf(snapshot, 'tallyward_alert_open')).toEqual([
      `${labels('a', 'shift')} 1`,
      `${labels('b', 'shift')} 1`,
      `${labels('c', 'impossible')} 0`,
      `${labels('c', 'shift')} 0`,
      `${labels('d', 'shift')} 0`,
    ]);
  });

  it('are not exported when their value is not finite, and that is counted', async () => {
    const evidence = sampleEvidence({ moved: { estimate: 0.1, atLeast: 0, atMost: Infinity } });
    const snapshot = emptySnapshot({ latestVerdicts: [sampleVerdict({ evidence })] });
    expect(await samplesOf(snapshot, 'tallyward_moved_at_most_ratio')).toEqual([]);
    expect(await samplesOf(snapshot, 'tallyward_series_withheld')).toContain(
      'tallyward_series_withheld{family="tallyward_moved_at_most_ratio"} 1',
    );
  });

  it('stay apart when label values imitate the separators of another series', async () => {
    const categories = new Map([['a', 3]]);
    const mixes = ['x', 'x,category:a'];
    const snapshot = emptySnapshot({
      mixes,
      totals: {
        ...emptySnapshot().totals,
        mixes: new Map(mixes.map((mix) => [mix, { events: 3, late: 0, categories }])),
      },
    });
    expect(await samplesOf(snapshot, 'tallyward_category_events_total')).toHaveLength(2);
  });

  it('over ten thousand a family are withheld, the rarest first, and counted', async () => {
    const categories = new Map(Array.from({ length: 10_005 }, (_, i) => [`c${i}`, i + 1]));
    const snapshot = emptySnapshot({
      mixes: ['m'],
      totals: {
        ...emptySnapshot().totals,
        mixes: new Map([['m', { events: 1, late: 0, categories }]]),
      },
    });
    const kept = await samplesOf(snapshot, 'tallyward_category_events_total');
    expect(kept).toHaveLength(10_000);
    expect(kept).toContain('tallyward_category_events_total{mix="m",category="c5"} 6');
    expect(kept).not.toContain('tallyward_category_events_total{mix="m",category="c4"} 5');
    expect(await samplesOf(snapshot, 'tallyward_series_withheld')).toContain(
      'tallyward_series_withheld{family="tallyward_category_events_total"} 5',
    );
  });
});

describe('the duration of rounds', () => {
  it('is kept between renderings and counted in buckets', async () => {
    const metrics = createMetrics();
    for (const durationMs of [4, 30, 90_000]) metrics.observeRound(durationMs);
    const text = (await metrics.render(emptySnapshot(), undefined)).body.split('\n');
    expect(text).toContain('tallyward_round_duration_seconds_bucket{le="0.005"} 1');
    expect(text).toContain('tallyward_round_duration_seconds_bucket{le="0.05"} 2');
    expect(text).toContain('tallyward_round_duration_seconds_bucket{le="1.0"} 2');
    expect(text).toContain('tallyward_round_duration_seconds_bucket{le="+Inf"} 3');
    expect(text).toContain('tallyward_round_duration_seconds_sum 90.034');
    expect(text).toContain('tallyward_round_duration_seconds_count 3');
  });
});
