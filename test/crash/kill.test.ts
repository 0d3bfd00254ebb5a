import { existsSync } from 'node:fs';
import { setTimeout as delay } from 'node:timers/promises';
import { describe, expect } from 'vitest';
import { openSqliteStore, type SqliteStore } from '../../src/store/sqlite/open.js';
import { Chance } from '../e2e/logs.js';
import { it, type Place, type Running } from '../e2e/program.js';
import { type CloudEvent, type Mood, Receiver } from '../e2e/receiver.js';
import { logName, Writer } from './writer.js';

// A real daemon is killed (SIGKILL) again and again while its log grows and is rotated and its
// webhook has moods. Afterwards every event is counted exactly once, and no alert is lost.

const kills = 50;
const storeName = 'var/store.db';

/** `oncall` is told at once, however old a window is; `office` gets digests. */
function configuration(receiver: Receiver, store = storeName): string {
  return `store: ${store}
listen: 127.0.0.1:0
collectors:
  app:
    tail: ${logName}
    decode: json
    time: ts
mixes:
  outcomes:
    from: app
    category: outcome
    split: [depot]
    window: 10s
    lateness: 1s
    yardstick: { baseline: { last: 30m } }
  depots:
    from: app
    category: depot
    window: 10s
    lateness: 1s
    yardstick: { baseline: { last: 30m } }
send:
  oncall: { webhook: "${receiver.url('oncall')}", secret: "three blind voles", fresh: 3660d }
  office: { webhook: "${receiver.url('office')}", fresh: 1s, digest: 1s }
`;
}

/** Refuses a third of the messages at first, and loses the answer to another third. */
class Moods {
  /** From now on everything is taken. */
  isCalm = false;
  private readonly seen = new Set<string>();

  of({ id }: CloudEvent): Mood {
    const isNew = !this.seen.has(id);
    this.seen.add(id);
    if (!isNew || this.isCalm) return 'take';
    return (['refuse', 'hang up', 'take'] as const)[this.seen.size % 3];
  }
}

async function withStore<T>(place: Place, read: (store: SqliteStore) => Promise<T>): Promise<T> {
  const store = await openSqliteStore({ path: place.path(storeName), readOnly: true });
  try {
    return await read(store);
  } finally {
    await store.close();
  }
}

type Partition = Awaited<ReturnType<SqliteStore['partitions']>>[number];

/** Waits until the store has a row of the present file that is as asked. */
async function untilStored(place: Place, isSo: (row: Partition) => boolean): Promise<void> {
  for (let look = 0; look < 1_000; look++) {
    const rows = existsSync(place.path(storeName))
      ? await withStore(place, (store) => store.partitions('app'))
      : [];
    if (rows.some((row) => !row.ended && row.name === logName && isSo(row))) return;
    await delay(20);
  }
  throw new Error('the daemon did not come as far in its file');
}

/** What takes part in one test. */
interface Scene {
  readonly place: Place;
  readonly chance: Chance;
  readonly writer: Writer;
  readonly receiver: Receiver;
}

/** Waits until the webhook has heard something more; gives up when there is nothing to tell. */
async function untilMoreIsHeard(receiver: Receiver): Promise<void> {
  const before = receiver.posts;
  for (let look = 0; receiver.posts === before && look < 60; look++) await delay(20);
}

/**
 * Lives until the next kill, while `act` writes. Some kills fall into the start, most into counting
 * and judging, some into delivering.
 */
async function liveUntilKilled(
  { place, chance, receiver }: Scene,
  act: (daemon: Running) => Promise<void>,
): Promise<void> {
  const daemon = place.launch(['start', '--config', 'watch.yaml']);
  const luck = chance.uniform();
  if (luck > 0.25) await daemon.waitFor(/metrics at/);
  await act(daemon);
  if (luck > 0.7) await untilMoreIsHeard(receiver);
  await delay(luck > 0.7 ? chance.whole(0, 20) : chance.whole(20, 400));
  await daemon.stop('SIGKILL');
}

/** Kills the daemon at 50 seeded moments; `rotate` empties or renames the file now and then. */
async function torment(scene: Scene, rotate: () => Promise<void>): Promise<void> {
  const { chance, writer } = scene;
  for (let kill = 0; kill < kills; kill++) {
    if (chance.uniform() < 0.3) writer.write();
    await liveUntilKilled(scene, async (daemon) => {
      writer.write();
      writer.write();
      if (kill % 6 === 5) {
        await daemon.waitFor(/metrics at/);
        await rotate();
      }
      writer.write();
    });
  }
  writer.flush();
}

interface Alert {
  readonly id: string;
  readonly ended: { readonly how: string } | null;
}

/** The alerts of all that was counted, judged once more. */
async function alertsOf(place: Place): Promise<readonly Alert[]> {
  const replay = ['rehearse', '--config', 'watch.yaml', '--store', storeName];
  const found = (await place.json([...replay, '--verdicts', 'replayed.ndjson'])) as {
    readonly alerts: readonly Alert[];
  };
  return found.alerts;
}

/** What the senders are to be told of: `alert event`, sorted. */
function dueOf(alerts: readonly Alert[]): string[] {
  return alerts
    .flatMap(({ id, ended }) => {
      const how = ended?.how ?? '';
      return [`${id} raised`, ...(['returned', 'settled'].includes(how) ? [`${id} ${how}`] : [])];
    })
    .sort();
}

/** What `oncall` took, each message once. An alert that moved again is told as that. */
function toldTo(receiver: Receiver): string[] {
  const direct = receiver.received.filter(({ path }) => path === '/oncall');
  const once = new Map(direct.map(({ event }) => [event.id, event]));
  return [...once.values()]
    .map(({ type, data }) => `${data.alerts[0].id} ${type.replace('tallyward.alert.', '')}`)
    .map((text) => text.replace(/ moved$/, ' raised'))
    .sort();
}

/** Alerts in digests that `office` took, each once. */
function digestedBy(receiver: Receiver): string[] {
  const digests = receiver.received.filter(({ path }) => path === '/office');
  return [...new Set(digests.flatMap(({ event }) => event.data.alerts.map(({ id }) => id)))].sort();
}

/** Counts what is there, and runs until what is due is delivered: refused messages wait. */
async function settle(place: Place, receiver: Receiver): Promise<readonly Alert[]> {
  const once = ['start', '--config', 'watch.yaml', '--once'];
  await place.output(once);
  const alerts = await alertsOf(place);
  const left = (): boolean =>
    dueOf(alerts).some((due) => !toldTo(receiver).includes(due)) ||
    alerts.some(({ id }) => !digestedBy(receiver).includes(id));
  for (let look = 0; left() && look < 60; look++) {
    await delay(500);
    await place.output(once);
  }
  return alerts;
}

interface Row {
  readonly mix: string;
  readonly strand: Readonly<Record<string, string>>;
  readonly start: string;
  readonly category: string;
  readonly count: number;
  readonly late: number;
}

async function counted(place: Place, config: string): Promise<Map<string, number>> {
  const { tallies } = (await place.json(['tallies', '--config', config])) as {
    readonly tallies: readonly Row[];
  };
  return new Map(
    tallies.map(({ mix, strand, start, category, count }) => [
      [mix, JSON.stringify(strand), start, category].join(' '),
      count,
    ]),
  );
}

const sorted = (counts: ReadonlyMap<string, number>): [string, number][] =>
  [...counts].sort(([a], [b]) => (a < b ? -1 : 1));

function expectNoAlertLost(alerts: readonly Alert[], receiver: Receiver): void {
  expect(alerts.length).toBeGreaterThan(0);
  expect(receiver.refused.length).toBeGreaterThan(0);
  expect(toldTo(receiver)).toEqual(dueOf(alerts));
  expect(digestedBy(receiver)).toEqual(alerts.map(({ id }) => id).sort());
  // What came more than once came under one id and to the byte.
  const bodies = new Set(receiver.received.map(({ event, body }) => `${event.id} ${body}`));
  expect(bodies.size).toBe(new Set(receiver.received.map(({ event }) => event.id)).size);
  expect(receiver.received.length).toBeGreaterThan(bodies.size);
}

type Way = 'renamed and made anew' | 'copied and emptied';
const ways: readonly (readonly [Way, number])[] = [
  ['renamed and made anew', 41],
  ['copied and emptied', 42],
];

async function rotate(way: Way, place: Place, writer: Writer): Promise<void> {
  writer.flush();
  if (way === 'renamed and made anew') {
    // Found, but as a rule not read to its end: the rest is read under its new name.
    const id = writer.identity;
    await untilStored(place, (row) => row.id === id);
    writer.rename();
  } else {
    // Only once all of it is counted: what nobody has read yet is lost by emptying a file.
    const { bytes } = writer;
    await untilStored(place, ({ position, waiting }) => waiting === null && position === bytes);
    writer.truncate();
  }
}

describe.concurrent('a daemon that is killed 50 times', { timeout: 180_000 }, () => {
  it.for(ways)(
    'when its file is %s meanwhile, counts each event once and tells each alert',
    async ([way, seed], { place }) => {
      const chance = new Chance(seed);
      const writer = new Writer(place, seed + 1_000);
      const moods = new Moods();
      const receiver = await Receiver.open((event) => moods.of(event));
      place.write('watch.yaml', configuration(receiver));
      const scene = { place, chance, writer, receiver };
      await torment(scene, () => rotate(way, place, writer));
      place.write('fresh.yaml', configuration(receiver, 'var/fresh.db'));
      moods.isCalm = true;
      const alerts = await settle(place, receiver);
      await receiver.close();
      expect(sorted(await counted(place, 'watch.yaml'))).toEqual(sorted(writer.counts));
      expectNoAlertLost(alerts, receiver);
      const verdicts = await place.output(['verdicts', '--config', 'watch.yaml', '--json']);
      expect(place.read('replayed.ndjson') === verdicts).toBe(true);

      // The twin: what is left under the file's name alone does not hold all that was counted.
      await place.output(['start', '--config', 'fresh.yaml', '--once']);
      expect(sorted(await counted(place, 'fresh.yaml'))).not.toEqual(sorted(writer.counts));
    },
  );
});
