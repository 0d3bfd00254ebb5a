import { describe, expect } from 'vitest';
import { Chance, line, type Shares } from './logs.js';
import { it, type Place } from './program.js';

// Live running with a restart after every piece, and rehearsing the whole, are to give the same
// verdicts to the byte, however the files arrived.

const startMs = Date.UTC(2026, 5, 1, 6);
const minuteMs = 60_000;
const minutes = 240;
const pieces = 50;
/** The trouble: from its first minute on, to its last. */
const trouble = [130, 165] as const;
const files = ['harbour', 'airfield', 'railway'] as const;
type File = (typeof files)[number];

const usual: Shares = [
  ['zugestellt', 0.82],
  ['zurückgestellt', 0.1],
  ['beschädigt', 0.05],
  ['verloren', 0.03],
];
const troubled: Shares = [
  ['zugestellt', 0.42],
  ['zurückgestellt', 0.1],
  ['beschädigt', 0.45],
  ['verloren', 0.03],
];
const regions: Shares = [
  ['north', 0.4],
  ['south', 0.35],
  ['east', 0.25],
];
const carriers: Shares = [
  ['van', 0.6],
  ['bike', 0.3],
  ['drone', 0.1],
];

function configuration(tolerance: string): string {
  return `store: var/store.db
collectors:
  hubs:
    tail: [${files.map((file) => `logs/${file}.ndjson`).join(', ')}]
    decode: json
    time: ts
mixes:
  outcomes:
    from: hubs
    category: outcome
    split: [region]
    window: 1m
    yardstick: { baseline: { last: 2h } }
    tolerance: ${tolerance}
  carriers:
    from: hubs
    category: carrier
    window: 5m
    yardstick: { baseline: { last: 2h } }
    tolerance: ${tolerance}
`;
}

/** Stamps of a bad clock: days ahead now and then, some hours behind. */
function badStamp(chance: Chance, atMs: number): number {
  const luck = chance.uniform();
  if (luck < 0.01) return atMs + chance.whole(2, 9) * 86_400_000;
  if (luck < 0.03) return atMs - chance.whole(61, 200) * minuteMs;
  return atMs;
}

/** The whole log of one hub. */
function logOf(file: File, chance: Chance): Buffer {
  const lines: string[] = [];
  for (let minute = 0; minute < minutes; minute++) {
    const isTrouble = minute >= trouble[0] && minute <= trouble[1];
    const count = chance.whole(20, 60);
    for (const atMs of chance.instants(count, startMs + minute * minuteMs, minuteMs)) {
      const region = chance.pick(regions);
      const outcome = chance.pick(isTrouble && region === 'north' ? troubled : usual);
      // Neither its first nor its last lines: an odd stamp waits there for the next record.
      const isOdd = file === 'airfield' && minute > 5 && minute < minutes - 5;
      const stampMs = isOdd ? badStamp(chance, atMs) : atMs;
      lines.push(line(stampMs, { region, outcome, carrier: chance.pick(carriers) }));
    }
    if (chance.uniform() < 0.05) lines.push('{"ts": broken\n');
  }
  return Buffer.from(lines.join(''));
}

/** How many bytes of a file are there after each piece: uneven, in the middle of lines. */
function deliveries(file: File, length: number, chance: Chance): number[] {
  // The railway's file does not even exist for a while, and comes later than the others' after.
  const isLagging = file === 'railway';
  const first = isLagging ? 9 : 0;
  const cuts = Array.from(
    { length: pieces - 1 - first },
    () => chance.uniform() ** (isLagging ? 0.5 : 1),
  );
  const sizes = cuts.sort((a, b) => a - b).map((cut) => Math.floor(cut * length));
  return [...Array.from({ length: first }, () => 0), ...sizes, length];
}

interface Row {
  readonly mix: string;
  readonly count: number;
  readonly late: number;
}

interface Summary {
  readonly events: number;
  readonly late: number;
  readonly rejected: Readonly<Record<string, number>>;
  readonly verdicts: Readonly<Record<string, number>>;
  readonly alerts: readonly { readonly id: string; readonly ended: unknown }[];
}

/** Delivers the files piece by piece and runs `start --once` after each. */
async function deliver(place: Place, seed: number): Promise<string> {
  const chance = new Chance(seed);
  const logs = files.map((file) => {
    const bytes = logOf(file, chance);
    return { name: `logs/${file}.ndjson`, bytes, sizes: deliveries(file, bytes.length, chance) };
  });
  let told = '';
  for (let piece = 0; piece < pieces; piece++) {
    for (const { name, bytes, sizes } of logs) {
      const from = piece === 0 ? 0 : sizes[piece - 1];
      if (sizes[piece] > from) place.append(name, bytes.subarray(from, sizes[piece]));
    }
    told += await place.output(['start', '--config', 'watch.yaml', '--once']);
  }
  return told;
}

/** Rejected records by reason, as the daemon's metrics have them. */
async function rejectedLive(place: Place): Promise<Record<string, number>> {
  const daemon = place.launch(['start', '--config', 'live.yaml']);
  const [, address] = await daemon.waitFor(/metrics at (\S+)\/metrics/);
  const text = await (await fetch(`${address}/metrics`)).text();
  await daemon.stop('SIGTERM');
  const found = text.matchAll(
    /^tallyward_rejected_total\{collector="hubs",reason="([^"]+)"\} (\d+)$/gm,
  );
  return Object.fromEntries([...found].map(([, reason, n]) => [reason, Number(n)]));
}

const names = (verdicts: string): string[] =>
  verdicts
    .trim()
    .split('\n')
    .map((text) => (JSON.parse(text) as { verdict: string }).verdict);

describe('live running and rehearsing', () => {
  it(
    'when files come late, askew and in 50 pieces with a restart after each, agree to the byte',
    { timeout: 120_000 },
    async ({ place }) => {
      place.write('watch.yaml', configuration('1%'));
      place.write('live.yaml', `listen: 127.0.0.1:0\n${configuration('1%')}`);
      place.write('wide.yaml', configuration('90%'));
      const told = await deliver(place, 20_260_601);
      const verdicts = await place.output(['verdicts', '--config', 'watch.yaml', '--json']);
      const rehearse = ['rehearse', '--config', 'watch.yaml', '--verdicts'];
      const summary = (await place.json([...rehearse, 'rehearsed.ndjson'])) as Summary;
      expect(place.read('rehearsed.ndjson') === verdicts).toBe(true);

      // The log was hard enough: a shift, its end, events too late, stamps from the future.
      expect(summary.verdicts['shifted']).toBeGreaterThan(20);
      expect(summary.alerts.some(({ ended }) => ended !== null)).toBe(true);
      expect(told.match(/^raised /gm)).toHaveLength(summary.alerts.length);
      expect(summary.late).toBeGreaterThan(100);
      expect(summary.rejected['future']).toBeGreaterThan(50);
      expect(summary.rejected['malformed']).toBeGreaterThan(10);

      const { tallies } = (await place.json(['tallies', '--config', 'watch.yaml'])) as {
        readonly tallies: readonly Row[];
      };
      const sum = (rows: readonly Row[], key: 'count' | 'late'): number =>
        rows.reduce((total, row) => total + row[key], 0);
      expect(sum(tallies, 'late')).toBe(summary.late);
      expect(
        sum(
          tallies.filter(({ mix }) => mix === 'outcomes'),
          'count',
        ),
      ).toBe(summary.events);
      expect(await rejectedLive(place)).toEqual(summary.rejected);

      // Judging the stored tallies again is a third way to the same list.
      await place.output([...rehearse, 'again.ndjson', '--store', 'var/store.db']);
      expect(place.read('again.ndjson') === verdicts).toBe(true);

      // The twin: with another tolerance the verdicts themselves differ, not just their digests.
      const wide = ['rehearse', '--config', 'wide.yaml', '--verdicts', 'wide.ndjson'];
      await place.output(wide);
      expect(names(place.read('wide.ndjson'))).toHaveLength(names(verdicts).length);
      expect(names(place.read('wide.ndjson'))).not.toEqual(names(verdicts));
    },
  );
});
