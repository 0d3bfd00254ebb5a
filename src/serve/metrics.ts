import { Counter, Gauge, Histogram, Registry } from 'prom-client';
import type { OpenMetricsContentType, PrometheusContentType } from 'prom-client';

import { families } from './families.js';
import type { Family, Sample } from './families.js';
import { boundedLabel } from './labels.js';
import { prefersOpenMetrics } from './negotiate.js';
import type { MetricsSnapshot } from './snapshot.js';

/** Renders snapshots and keeps what only the running process knows. */
export interface Metrics {
  /** Counts one round; durations in milliseconds, 0 or more. */
  observeRound(durationMs: number): void;
  /** The metrics in the format that the `Accept` header asks for (text 0.0.4 without one). */
  render(snapshot: MetricsSnapshot, accept: string | undefined): Promise<RenderedMetrics>;
}

export interface RenderedMetrics {
  readonly contentType: string;
  readonly body: string;
}

type Rendered = Awaited<ReturnType<Gauge['get']>>;
type RenderedHistogram = Awaited<ReturnType<Histogram['get']>>;
type ContentType = OpenMetricsContentType | PrometheusContentType;

const maxSeries = 10_000;
const roundBucketsSeconds = [0.005, 0.01, 0.025, 0.05, 0.1, 0.25, 0.5, 1, 2.5, 5, 10, 30, 60];

/**
 * Makes the metrics of one process. The snapshot alone decides all but the round durations.
 * Formats: text exposition format 0.0.4 (Prometheus project, 2014) and OpenMetrics 1.0 (2020).
 */
export function createMetrics(): Metrics {
  const rounds = new Histogram({
    name: 'tallyward_round_duration_seconds',
    help: 'Time that judging and committing a round took.',
    buckets: roundBucketsSeconds,
    registers: [],
  });
  return {
    observeRound: (durationMs) => rounds.observe(durationMs / 1000),
    render: async (snapshot, accept) => {
      const contentType: ContentType = prefersOpenMetrics(accept)
        ? Registry.OPENMETRICS_CONTENT_TYPE
        : Registry.PROMETHEUS_CONTENT_TYPE;
      return { contentType, body: await renderAs(contentType, { snapshot, rounds }) };
    },
  };
}

async function renderAs(
  contentType: ContentType,
  what: { readonly snapshot: MetricsSnapshot; readonly rounds: Histogram },
): Promise<string> {
  // A new registry each time: rendering as OpenMetrics renames the counters inside it for good.
  const registry = new Registry<ContentType>();
  registry.setContentType(contentType);
  const withheld: Sample[] = [];
  for (const family of families) {
    const { kept, left } = limit(family.samples(what.snapshot));
    registry.registerMetric(metricOf(family, kept));
    if (family.labelNames.length > 0) withheld.push({ labels: [family.name], value: left });
  }
  registry.registerMetric(metricOf(withheldFamily, withheld));
  registry.registerMetric(new SnapshotHistogram(await what.rounds.get()));
  return registry.metrics();
}

const withheldFamily: Omit<Family, 'samples'> = {
  type: 'gauge',
  name: 'tallyward_series_withheld',
  help: 'Series over the limit of 10,000 a family, or not finite, that are not exported.',
  labelNames: ['family'],
};

/** Bounds label values and the number of series; no two series have the same labels. */
function limit(samples: readonly Sample[]): {
  readonly kept: readonly Sample[];
  readonly left: number;
} {
  const kept = new Map<string, Sample>();
  for (const { labels, value } of samples) {
    if (kept.size >= maxSeries) break;
    const bounded = labels.map(boundedLabel);
    const key = JSON.stringify(bounded);
    if (Number.isFinite(value) && !kept.has(key)) kept.set(key, { labels: bounded, value });
  }
  return { kept: [...kept.values()], left: samples.length - kept.size };
}

function metricOf(family: Omit<Family, 'samples'>, samples: readonly Sample[]): Counter | Gauge {
  const values = samples.map(({ labels, value }) => ({
    labels: Object.fromEntries(family.labelNames.map((name, i) => [name, labels[i] ?? ''])),
    value,
  }));
  return family.type === 'counter'
    ? new SnapshotCounter(family, values)
    : new SnapshotGauge(family, values);
}

/**
 * A counter whose samples are given, not counted here. The library's own keeping joins labels with
 * `:` and `,`, which lets hostile values of one series stand for another.
 */
class SnapshotCounter extends Counter {
  readonly #values: Rendered['values'];

  constructor(family: Omit<Family, 'samples'>, values: Rendered['values']) {
    super(configurationOf(family));
    this.#values = values;
  }

  override async get(): Promise<Rendered> {
    return { ...(await super.get()), values: this.#values };
  }
}

/** A gauge whose samples are given; see SnapshotCounter. */
class SnapshotGauge extends Gauge {
  readonly #values: Rendered['values'];

  constructor(family: Omit<Family, 'samples'>, values: Rendered['values']) {
    super(configurationOf(family));
    this.#values = values;
  }

  override async get(): Promise<Rendered> {
    return { ...(await super.get()), values: this.#values };
  }
}

function configurationOf(family: Omit<Family, 'samples'>): {
  name: string;
  help: string;
  labelNames: readonly string[];
  registers: [];
} {
  const { name, help, labelNames } = family;
  return { name, help, labelNames, registers: [] };
}

/** The histogram as it stood, its bounds written as floats (`1.0`), as OpenMetrics asks of `le`. */
class SnapshotHistogram extends Histogram {
  readonly #given: RenderedHistogram;

  constructor(given: RenderedHistogram) {
    super({ name: given.name, help: given.help, registers: [] });
    const values = given.values.map((sample) => {
      const { le } = sample.labels;
      if (typeof le !== 'number' || !Number.isInteger(le)) return sample;
      return { ...sample, labels: { ...sample.labels, le: le.toFixed(1) } };
    });
    this.#given = { ...given, values };
  }

  /** What the library calls when it prints a histogram; its types leave the method out. */
  getForPromString(): Promise<RenderedHistogram> {
    return Promise.resolve(this.#given);
  }
}
