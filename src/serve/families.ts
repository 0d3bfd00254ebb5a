import type { Alert, AlertState } from '../terms/alert.js';
import type { Verdict, VerdictName } from '../terms/verdict.js';
import type { MetricsSnapshot } from './snapshot.js';

/** One sample: label values in the order of the family's label names, and the value. */
export interface Sample {
  readonly labels: readonly string[];
  readonly value: number;
}

/** One family of metrics, as a rule over the snapshot. */
export interface Family {
  readonly type: 'counter' | 'gauge';
  readonly name: string;
  /** Plain words, without quotes and backslashes: the two formats escape those differently. */
  readonly help: string;
  readonly labelNames: readonly string[];
  /** Where there may be too many, those to be kept come first. */
  readonly samples: (snapshot: MetricsSnapshot) => readonly Sample[];
}

const verdictNames: readonly VerdictName[] = [
  'steady',
  'shifted',
  'thin',
  'silent',
  'learning',
  'left-out',
];
const outcomes = ['delivered', 'failed', 'gave-up'] as const;
const openStates: readonly AlertState[] = ['unacknowledged', 'acknowledged', 'returned'];

/** Every family but the histogram and the count of withheld series, in the order of printing. */
export const families: readonly Family[] = [
  {
    type: 'counter',
    name: 'tallyward_events_total',
    help: 'Events counted, late ones included.',
    labelNames: ['mix'],
    samples: ({ mixes, totals }) =>
      mixes.map((mix) => ({ labels: [mix], value: totals.mixes.get(mix)?.events ?? 0 })),
  },
  {
    type: 'counter',
    name: 'tallyward_category_events_total',
    help: 'Events counted by category, late ones included.',
    labelNames: ['mix', 'category'],
    samples: ({ mixes, totals }) => mixes.flatMap((mix) => byCategory(mix, totals)),
  },
  {
    type: 'counter',
    name: 'tallyward_rejected_total',
    help: 'Records that were refused, by reason.',
    labelNames: ['collector', 'reason'],
    samples: ({ totals }) =>
      totals.rejected.map((row) => ({ labels: [row.collector, row.reason], value: row.count })),
  },
  {
    type: 'counter',
    name: 'tallyward_late_total',
    help: 'Events that came after their window had closed.',
    labelNames: ['mix'],
    samples: ({ mixes, totals }) =>
      mixes.map((mix) => ({ labels: [mix], value: totals.mixes.get(mix)?.late ?? 0 })),
  },
  {
    type: 'counter',
    name: 'tallyward_windows_total',
    help: 'Windows of strands that were given a verdict.',
    labelNames: ['mix', 'verdict'],
    samples: windowSamples,
  },
  {
    type: 'gauge',
    name: 'tallyward_alert_open',
    help: '1 while the strand is in alarm (unacknowledged or acknowledged), else 0.',
    labelNames: ['mix', 'strand', 'kind'],
    samples: alertSamples,
  },
  {
    type: 'gauge',
    name: 'tallyward_alerts',
    help: 'Open alerts by state.',
    labelNames: ['state'],
    samples: ({ alerts }) =>
      openStates.map((state) => ({
        labels: [state],
        value: alerts.filter((alert) => alert.state === state).length,
      })),
  },
  {
    type: 'gauge',
    name: 'tallyward_moved_ratio',
    help: 'Share of events that changed category in the last window, when it was judged.',
    labelNames: ['mix', 'strand'],
    samples: (snapshot) => movedSamples(snapshot, 'estimate'),
  },
  {
    type: 'gauge',
    name: 'tallyward_moved_at_least_ratio',
    help: 'Lower limit of the share of events that changed category in the last window.',
    labelNames: ['mix', 'strand'],
    samples: (snapshot) => movedSamples(snapshot, 'atLeast'),
  },
  {
    type: 'gauge',
    name: 'tallyward_moved_at_most_ratio',
    help: 'Upper limit of the share of events that changed category in the last window.',
    labelNames: ['mix', 'strand'],
    samples: (snapshot) => movedSamples(snapshot, 'atMost'),
  },
  {
    type: 'gauge',
    name: 'tallyward_window_end_timestamp_seconds',
    help: 'End of the last judged window, in event time.',
    labelNames: ['mix'],
    samples: ({ judgedToMs }) =>
      [...judgedToMs].map(([mix, endMs]) => ({ labels: [mix], value: endMs / 1000 })),
  },
  {
    type: 'gauge',
    name: 'tallyward_watermark_timestamp_seconds',
    help: 'Event time up to which the collector is complete.',
    labelNames: ['collector'],
    samples: ({ collectors }) =>
      collectors.flatMap(({ name, watermarkMs }) => optional([name], seconds(watermarkMs))),
  },
  {
    type: 'gauge',
    name: 'tallyward_collector_lag_bytes',
    help: 'Bytes known to be unread.',
    labelNames: ['collector'],
    samples: ({ collectors }) =>
      collectors.flatMap(({ name, lagBytes }) => optional([name], lagBytes)),
  },
  {
    type: 'gauge',
    name: 'tallyward_last_round_timestamp_seconds',
    help: 'Real time at which the last round was committed.',
    labelNames: [],
    samples: ({ lastRoundMs }) => optional([], seconds(lastRoundMs)),
  },
  {
    type: 'gauge',
    name: 'tallyward_false_alarm_budget_spent_ratio',
    help: 'False alarms that judging may have cost, as a share of what is accepted.',
    labelNames: [],
    samples: ({ budgetSpentRatio }) => optional([], budgetSpentRatio),
  },
  {
    type: 'gauge',
    name: 'tallyward_store_bytes',
    help: 'Size of the store.',
    labelNames: [],
    samples: ({ storeBytes }) => optional([], storeBytes),
  },
  {
    type: 'counter',
    name: 'tallyward_deliveries_total',
    help: 'Attempts to deliver a message, by outcome.',
    labelNames: ['sender', 'outcome'],
    samples: deliverySamples,
  },
];

function byCategory(mix: string, totals: MetricsSnapshot['totals']): readonly Sample[] {
  const categories = totals.mixes.get(mix)?.categories ?? new Map<string, number>();
  // The largest first: where there are too many, it is the rare ones that are withheld.
  return [...categories]
    .map(([category, value]) => ({ labels: [mix, category], value }))
    .sort((a, b) => b.value - a.value);
}

function windowSamples({ mixes, totals }: MetricsSnapshot): readonly Sample[] {
  return mixes.flatMap((mix) =>
    verdictNames.map((verdict) => {
      const row = totals.verdicts.find((item) => item.mix === mix && item.verdict === verdict);
      return { labels: [mix, verdict], value: row?.count ?? 0 };
    }),
  );
}

function deliverySamples({ senders, totals }: MetricsSnapshot): readonly Sample[] {
  return senders.flatMap((sender) =>
    outcomes.map((outcome) => {
      const isIt = (row: { readonly sender: string; readonly outcome: string }): boolean =>
        row.sender === sender && row.outcome === outcome;
      return { labels: [sender, outcome], value: totals.deliveries.find(isIt)?.count ?? 0 };
    }),
  );
}

/**
 * Strands in alarm first, then 0 for alerts that have returned and for every strand that has been
 * judged, so that a rule sees the fall to 0 and not a gap.
 */
function alertSamples({ alerts, latestVerdicts }: MetricsSnapshot): readonly Sample[] {
  const labelsOf = ({ mix, strand, kind }: Alert): readonly string[] => [mix, strand, kind];
  const inAlarm = alerts.filter(
    ({ state }) => state === 'unacknowledged' || state === 'acknowledged',
  );
  const candidates = [
    ...inAlarm.map((alert) => ({ labels: labelsOf(alert), value: 1 })),
    ...alerts.map((alert) => ({ labels: labelsOf(alert), value: 0 })),
    ...latestVerdicts.map(({ mix, strand }) => ({ labels: [mix, strand, 'shift'], value: 0 })),
  ];
  const byLabels = new Map<string, Sample>();
  for (const sample of candidates) {
    const key = JSON.stringify(sample.labels);
    if (!byLabels.has(key)) byLabels.set(key, sample);
  }
  return [...byLabels.values()];
}

function movedSamples(
  { latestVerdicts }: MetricsSnapshot,
  part: 'estimate' | 'atLeast' | 'atMost',
): readonly Sample[] {
  return latestVerdicts.flatMap((verdict) =>
    optional([verdict.mix, verdict.strand], movedOf(verdict)?.[part] ?? null),
  );
}

/** Only a judged window says how much moved; any other makes the strand's gauges vanish. */
function movedOf({ verdict, evidence }: Verdict): NonNullable<Verdict['evidence']>['moved'] | null {
  return verdict === 'steady' || verdict === 'shifted' ? (evidence?.moved ?? null) : null;
}

function optional(labels: readonly string[], value: number | null): readonly Sample[] {
  return value === null ? [] : [{ labels, value }];
}

function seconds(ms: number | null): number | null {
  return ms === null ? null : ms / 1000;
}
