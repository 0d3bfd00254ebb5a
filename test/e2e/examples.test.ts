import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gunzipSync } from 'node:zlib';
import { describe, expect } from 'vitest';
import { it, type Place } from './program.js';

// The example configurations, each over an extract of the data set it was written for. What is
// expected is what the sources document (test/e2e/data/SOURCES.md), not what came out.

function extract(name: string): Buffer {
  return gunzipSync(readFileSync(new URL(`data/${name}.ndjson.gz`, import.meta.url)));
}

function configuration(name: string): string {
  return fileURLToPath(new URL(`../../config/${name}.yaml`, import.meta.url));
}

interface Mover {
  readonly category: string;
  readonly before: number;
  readonly after: number;
  readonly blamed: boolean;
  readonly members?: readonly Omit<Mover, 'blamed'>[];
}

interface Alert {
  readonly mix: string;
  readonly window: { readonly start: string; readonly end: string };
  readonly since: { readonly estimate: string; readonly earliest: string; readonly latest: string };
  readonly ended: { readonly at: string } | null;
  readonly sentence: string;
  readonly evidence: { readonly movers: readonly Mover[] };
}

interface Verdict {
  readonly mix: string;
  readonly window: { readonly start: string; readonly end: string };
  readonly verdict: string;
  readonly evidence: { readonly movers: readonly Mover[] } | null;
}

interface Rehearsed {
  readonly events: number;
  readonly rejected: Readonly<Record<string, number>>;
  readonly late: number;
  readonly alerts: readonly Alert[];
  readonly verdicts: readonly Verdict[];
}

/** Rehearses an example over its extract; `change` edits the configuration's text. */
async function rehearse(
  place: Place,
  name: string,
  change: (text: string) => string = (text) => text,
): Promise<Rehearsed> {
  place.write('example.yaml', change(readFileSync(configuration(name), 'utf8')));
  const args = ['rehearse', '--config', 'example.yaml', '--verdicts', 'verdicts.ndjson'];
  const found = (await place.json(args, { stdin: extract(name) })) as Omit<Rehearsed, 'verdicts'>;
  const lines = place.read('verdicts.ndjson').trim().split('\n');
  return { ...found, verdicts: lines.map((text) => JSON.parse(text) as Verdict) };
}

/** Categories that rose and were blamed, those inside a joint bin by their own shares. */
function risen(evidence: { readonly movers: readonly Mover[] } | null): string[] {
  const blamed = (evidence?.movers ?? []).filter((mover) => mover.blamed);
  const single = blamed.flatMap((mover) => mover.members ?? [mover]);
  return single.filter(({ before, after }) => after > before).map(({ category }) => category);
}

describe('config/flu.yaml over the season of 2008 and 2009', () => {
  it('when the new virus appears, raises in that week or the next, and names it', async ({
    place,
  }) => {
    const { events, rejected, alerts } = await rehearse(place, 'flu');
    expect(events).toBe(114_613);
    expect(rejected).toEqual({});
    // The week of Monday, 20 April 2009, or the next.
    const starts = alerts.map(({ window }) => window.start);
    expect(['2009-04-20T00:00:00Z', '2009-04-27T00:00:00Z']).toContain(starts[0]);
    expect(risen(alerts[0].evidence)).toContain('A_H1N1pdm09');
    expect(alerts[0].since.latest >= '2009-04-13').toBe(true);
  });

  // The twin of the test above: the season before it, in itself, is no reason to raise anything.
  it('when the specimens from then on are left out, raises nothing', async ({ place }) => {
    const text = extract('flu').toString('utf8');
    const before = text.slice(0, text.indexOf('{"ts":"2009-04-13'));
    const args = ['rehearse', '--config', configuration('flu')];
    const found = (await place.json(args, { stdin: before })) as Rehearsed;
    expect(found.events).toBeGreaterThan(20_000);
    expect(found.alerts).toEqual([]);
  });
});

describe('config/flights.yaml over the first months of 2011', () => {
  it('when the winter storm comes, is in alert on both its days and names the weather', async ({
    place,
  }) => {
    const { events, alerts, verdicts } = await rehearse(place, 'flights');
    expect(events).toBe(45_385);
    for (const day of ['2011-02-03T06:00:00Z', '2011-02-04T06:00:00Z']) {
      const verdict = verdicts.find((v) => v.mix === 'flight-outcomes' && v.window.start === day);
      expect(verdict?.verdict).toBe('shifted');
      expect(risen(verdict?.evidence ?? null)).toContain('cancelled_B');
      const open = alerts.filter(
        ({ window, ended }) => window.start <= day && (ended === null || ended.at > day),
      );
      expect(open.map(({ mix }) => mix)).toEqual(['flight-outcomes']);
    }
  });

  it('when only the carriers are watched, raises nothing although they share the days', async ({
    place,
  }) => {
    const { alerts, verdicts } = await rehearse(place, 'flights');
    expect(alerts.filter(({ mix }) => mix === 'flight-carriers')).toEqual([]);
    const judged = verdicts.filter((v) => v.mix === 'flight-carriers' && v.evidence !== null);
    expect(judged.length).toBeGreaterThan(40);
  });
});

describe('config/web-server.yaml over its day', () => {
  it('when one client is refused all evening, raises there and blames 403', async ({ place }) => {
    const { events, alerts } = await rehearse(place, 'web-server');
    expect(events).toBe(47_748);
    const refusals = alerts.filter(({ evidence }) => risen(evidence).includes('403'));
    expect(refusals.length).toBeGreaterThan(0);
    // 21:00 EDT is 01:00 UTC of the next day.
    for (const { window } of refusals) expect(window.end > '1995-08-31T01:00:00Z').toBe(true);
  });

  it('when day and night change the traffic, raises nothing for the kinds of file', async ({
    place,
  }) => {
    const { alerts, verdicts } = await rehearse(place, 'web-server');
    expect(alerts.filter(({ mix }) => mix === 'file-kinds')).toEqual([]);
    const judged = verdicts.filter((v) => v.mix === 'file-kinds' && v.evidence !== null);
    expect(judged.length).toBeGreaterThan(100);
  });

  it('when the tolerance is as wide as everything, raises nothing even in the evening', async ({
    place,
  }) => {
    const wide = (text: string): string =>
      text.replaceAll('    window: 10m', '    window: 10m\n    tolerance: 100%');
    expect((await rehearse(place, 'web-server', wide)).alerts).toEqual([]);
  });
});

describe('config/army-deaths.yaml and its series', () => {
  it('when the months are rehearsed, counts every death and judges every whole month', async ({
    place,
  }) => {
    const { events, late, rejected, verdicts } = await rehearse(place, 'army-deaths');
    // The README of the data set counts 17,982 deaths in 24 months; the last month stays open.
    expect({ events, late, rejected }).toEqual({ events: 17_982, late: 0, rejected: {} });
    expect(verdicts).toHaveLength(23);
  });

  it('when what was before March 1855 is weighed against what was then, finds a shift', async ({
    place,
  }) => {
    const text = extract('army-deaths').toString('utf8');
    const at = text.indexOf('{"ts":"1855-03');
    place.write('before.ndjson', text.slice(0, at));
    place.write('after.ndjson', text.slice(at));
    const weigh = ['weigh', 'before.ndjson', 'after.ndjson', '--category', 'cause'];
    const { status, stdout } = await place.run([...weigh, '--json', '--fail-on-shift', '0.001']);
    expect(status).toBe(1);
    const { movers } = JSON.parse(stdout) as { movers: readonly Mover[] };
    expect(movers.map(({ category }) => category).sort()).toEqual(['disease', 'other', 'wounds']);
    expect(movers.some(({ blamed }) => blamed)).toBe(true);
  });

  it('when every second death is weighed against the others, finds none', async ({ place }) => {
    const lines = extract('army-deaths').toString('utf8').trim().split('\n');
    const half = (rest: number): string => lines.filter((_, at) => at % 2 === rest).join('\n');
    place.write('before.ndjson', half(0));
    place.write('after.ndjson', half(1));
    const weigh = ['weigh', 'before.ndjson', 'after.ndjson', '--category', 'cause'];
    const { status } = await place.run([...weigh, '--json', '--fail-on-shift', '0.001']);
    expect(status).toBe(0);
  });
});
