import { spawnSync } from 'node:child_process';
import { fileURLToPath } from 'node:url';

import { describe, expect, it } from 'vitest';

import { createMetrics } from '../../src/serve/metrics.js';
import type { MetricsSnapshot } from '../../src/serve/snapshot.js';
import { emptySnapshot, fullSnapshot } from '../unit/serve/snapshots.js';

const python = '/usr/bin/python3';
const checker = fileURLToPath(new URL('openmetrics.py', import.meta.url));
const formats = ['openmetrics', 'text'] as const;
type Format = (typeof formats)[number];

const hasParser = spawnSync(python, ['-c', 'import prometheus_client']).status === 0;
// `.ci/run` promises to leave nothing out: there the tests run, and fail without the parser.
const isWanted = hasParser || process.env['TALLYWARD_REQUIRE_ALL'] !== undefined;
if (!isWanted) {
  console.log('skipped: the reference metrics parser (python3-prometheus-client) is not installed');
}

/** Values that have broken exporters: separators, escapes, line ends, and text UTF-8 lacks. */
const hostile = [
  '"',
  '\\',
  '\\n',
  '\\"',
  'a\nb',
  'a\r\nb',
  '\\\\\n"',
  '{mix="x"} 1',
  '# EOF',
  '\n# EOF\n',
  ',strand:a,',
  '} 1 # {',
  '',
  ' ',
  '\u0000',
  '\u2028',
  '\uD800',
  'é',
  '😀'.repeat(300),
  'x'.repeat(5_000),
  '__proto__',
  '\ttab',
];

async function render(snapshot: MetricsSnapshot, format: Format): Promise<string> {
  const metrics = createMetrics();
  for (const durationMs of [0, 3, 999, 1e6]) metrics.observeRound(durationMs);
  const accept = format === 'openmetrics' ? 'application/openmetrics-text' : undefined;
  return (await metrics.render(snapshot, accept)).body;
}

function check(text: string, format: Format): string {
  const result = spawnSync(python, [checker, format], { input: text, encoding: 'utf8' });
  return `${result.stdout}${result.stderr}`.trim();
}

/** One snapshot in which every name of every family takes each hostile value. */
function hostileSnapshot(): MetricsSnapshot {
  const parts = hostile.map((value) => fullSnapshot((plain) => `${value}${plain}`));
  const categories = new Map(hostile.map((value, i) => [value, i]));
  const mixes = new Map(hostile.map((mix) => [mix, { events: 1, late: 0, categories }]));
  return emptySnapshot({
    mixes: [...hostile, ...parts.flatMap((part) => part.mixes)],
    senders: parts.flatMap((part) => part.senders),
    totals: {
      accepted: new Map(),
      rejected: parts.flatMap((part) => part.totals.rejected),
      mixes: new Map([...mixes, ...parts.flatMap((part) => [...part.totals.mixes])]),
      verdicts: parts.flatMap((part) => part.totals.verdicts),
      deliveries: parts.flatMap((part) => part.totals.deliveries),
    },
    latestVerdicts: parts.flatMap((part) => part.latestVerdicts),
    alerts: parts.flatMap((part) => part.alerts),
    judgedToMs: new Map(parts.flatMap((part) => [...part.judgedToMs])),
    collectors: parts.flatMap((part) => part.collectors),
  });
}

describe.runIf(isWanted)('metrics read by the reference parser', () => {
  // 18 families of the contract and the one that counts withheld series.
  const all = 'ok 19 families';

  it.each(formats)('are accepted in %s when nothing has happened yet', async (format) => {
    expect(check(await render(emptySnapshot(), format), format)).toBe(all);
  });

  it.each(formats)('are accepted in %s with hostile values everywhere', async (format) => {
    const text = await render(hostileSnapshot(), format);
    expect(check(text, format)).toBe(all);
    const lines = text.split('\n');
    const count = (name: string): number =>
      lines.filter((line) => line.startsWith(`${name}{`)).length;
    // Every pair of hostile mix and category, and one category of each of the other mixes.
    expect(count('tallyward_category_events_total')).toBe(hostile.length ** 2 + hostile.length);
    expect(count('tallyward_moved_ratio')).toBe(hostile.length);
    expect(count('tallyward_collector_lag_bytes')).toBe(hostile.length);
  });
});

describe.runIf(isWanted)('the check itself', () => {
  const sample = 'tallyward_store_bytes 4096\n';

  it('finds a sample that comes twice, in either format', async () => {
    for (const format of formats) {
      const text = (await render(emptySnapshot(), format)).replace(sample, sample + sample);
      expect(check(text, format)).toMatch(/duplicate sample/);
    }
  });

  it('finds an escape that the format does not know', async () => {
    for (const format of formats) {
      const text = await render(
        fullSnapshot((plain) => plain),
        format,
      );
      expect(check(text.replace('"approved"', '"app\\roved"'), format)).toMatch(/bad escape/);
    }
  });

  it('finds a missing end, and a help that comes twice', async () => {
    const text = await render(emptySnapshot(), 'openmetrics');
    expect(check(text.replace('# EOF\n', ''), 'openmetrics')).toMatch(/EOF/);
    const help = '# HELP tallyward_store_bytes Size of the store.\n';
    expect(check(text.replace(help, help + help), 'openmetrics')).toMatch(/HELP/);
    const plain = await render(emptySnapshot(), 'text');
    expect(check(plain.replace(help, help + help), 'text')).toMatch(/HELP/);
  });
});
