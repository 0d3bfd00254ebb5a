import { describe, expect, it } from 'vitest';
import type { CollectorConfig, MixConfig } from '../../../src/config/types.js';
import { Counter } from '../../../src/collect/tally/counter.js';
import type { CounterOptions } from '../../../src/collect/tally/counter.js';
import { PartitionReader, freshPartition } from '../../../src/collect/tally/partitionReader.js';
import type { Partition } from '../../../src/terms/partition.js';
import {
  DAY,
  HOUR,
  Ledger,
  MINUTE,
  T0,
  collectorConfig,
  mixConfig,
  record,
} from './collectHelper.js';

interface Setting {
  readonly mixes?: readonly MixConfig[];
  readonly config?: Partial<CollectorConfig>;
  readonly judgedToMs?: number;
  readonly known?: CounterOptions['known'];
}

/** Counts whole lines of one partition; more can be fed until it is looked at. */
function counting(setting: Setting = {}) {
  const config = collectorConfig(setting.config);
  const counter = new Counter({
    config,
    mixes: setting.mixes ?? [mixConfig()],
    judgedTo: () => setting.judgedToMs ?? -Infinity,
    ...(setting.known === undefined ? {} : { known: setting.known }),
  });
  const fresh = freshPartition('gateway', 'f', 'f');
  const reader = new PartitionReader(fresh, counter, config.maxLineBytes);
  const ledger = new Ledger();
  const feed = (...texts: string[]): Partition => {
    for (const text of texts) reader.feed(Buffer.from(`${text}\n`));
    const row = reader.snapshot();
    ledger.commit({ ...counter.drain(), partitions: [row] });
    return row;
  };
  const end = (): Partition => {
    reader.endOfInput();
    return feed();
  };
  return { ledger, feed, end };
}

const counts = (ledger: Ledger) => Object.fromEntries(ledger.counts);
const key = (category: string, strand = 'all', startMs = T0, mix = 'outcomes') =>
  [mix, strand, startMs, category].join('|');
const once = { onTime: 1, late: 0 };

describe('the first record and stamps far ahead', () => {
  it('given a bad first stamp, refuses it and counts from the next on', () => {
    const { feed, ledger } = counting();
    const bad = feed(record(T0 + 400 * DAY, 'declined'));
    expect(bad).toMatchObject({ position: 0, watermarkMs: null, firstMs: null });
    expect(bad.waiting?.cells.map((cell) => cell.category)).toEqual(['declined']);
    const row = feed(record(T0), record(T0 + MINUTE));
    expect(row).toMatchObject({ firstMs: T0, watermarkMs: T0 + MINUTE, waiting: null });
    expect(ledger.rejected).toEqual(new Map([['future', 1]]));
    expect(ledger.events('approved')).toBe(2);
  });

  it('given a gap of days, counts both sides of it and none late', () => {
    const { feed, ledger } = counting();
    const row = feed(record(T0), record(T0 + 9 * DAY), record(T0 + 9 * DAY + MINUTE));
    expect(row.watermarkMs).toBe(T0 + 9 * DAY + MINUTE);
    expect(ledger.rejected.size).toBe(0);
    expect([...ledger.counts.values()].every((count) => count.late === 0)).toBe(true);
  });

  it('given a clock gone wild amid good records, refuses only that record', () => {
    const { feed, ledger } = counting();
    const row = feed(record(T0), record(T0), record(T0 + 9 * DAY), record(T0 + MINUTE));
    expect(row.watermarkMs).toBe(T0 + MINUTE);
    expect(ledger.rejected).toEqual(new Map([['future', 1]]));
    expect(ledger.accepted).toBe(3);
  });

  it('given a stamp exactly a day ahead, counts it at once; a millisecond more waits', () => {
    expect(counting().feed(record(T0), record(T0), record(T0 + DAY)).waiting).toBe(null);
    expect(counting().feed(record(T0), record(T0), record(T0 + DAY + 1)).waiting).toMatchObject({
      atMs: T0 + DAY + 1,
    });
  });

  it('given the next record a day below, takes it for a gap; further is a bad stamp', () => {
    const gap = counting();
    gap.feed(record(T0), record(T0), record(T0 + 9 * DAY), record(T0 + 8 * DAY));
    expect(gap.ledger.rejected.size).toBe(0);
    const bad = counting();
    bad.feed(record(T0), record(T0), record(T0 + 9 * DAY), record(T0 + 8 * DAY - 1));
    expect(bad.ledger.rejected).toEqual(new Map([['future', 1]]));
  });

  it('given refusals while a record waits, holds them back until it is settled', () => {
    const { feed, ledger } = counting();
    const waits = feed(record(T0), 'broken', 'broken');
    expect(waits.position).toBe(0);
    expect(ledger.rejected.size).toBe(0);
    feed(record(T0));
    expect(ledger.rejected).toEqual(new Map([['malformed', 2]]));
  });

  it('given the end of input, counts what waits and leaves the watermark', () => {
    const { feed, end, ledger } = counting();
    feed(record(T0), record(T0 + MINUTE), record(T0 + 9 * DAY, 'declined'));
    expect(end()).toMatchObject({ watermarkMs: T0 + MINUTE, waiting: null });
    expect(ledger.events('declined')).toBe(1);
  });
});

describe('what a record counts as', () => {
  it('given a split, counts in its strand and in the whole; without, in the whole only', () => {
    const mixes = [mixConfig({ split: [['b'], ['a', 'x']] }), mixConfig({ name: 'plain' })];
    const { feed, end, ledger } = counting({ mixes });
    feed(record(T0, 'ok', { b: 1.5, a: { x: 'k=v' } }));
    end();
    expect(counts(ledger)).toEqual({
      [key('ok')]: once,
      [key('ok', 'a.x=k\\=v,b=1.5')]: once,
      [key('ok', 'all', T0, 'plain')]: once,
    });
  });

  it('given absent values and values that look made, keeps them apart', () => {
    const { feed, end, ledger } = counting({ mixes: [mixConfig({ split: [['r']] })] });
    feed(`{"ts":"${new Date(T0).toISOString()}"}`, record(T0, '(missing)', { r: '(rest)' }));
    end();
    expect(counts(ledger)).toEqual({
      [key('(missing)')]: once,
      [key('(missing)', 'r=(missing)')]: once,
      [key('\\(missing)')]: once,
      [key('\\(missing)', 'r=\\\\(rest)')]: once,
    });
  });

  it('given names over 256 bytes, cuts them at whole characters and keeps them apart', () => {
    const { feed, end, ledger } = counting();
    const long = 'é'.repeat(150);
    feed(record(T0, `${long}a`), record(T0, `${long}b`), record(T0, 'é'.repeat(128)));
    end();
    const names = [...ledger.counts.keys()].map((cell) => cell.split('|')[3] ?? '');
    expect(new Set(names).size).toBe(3);
    expect(names.every((name) => Buffer.byteLength(name) <= 256)).toBe(true);
    expect(names).toContain('é'.repeat(128));
    expect(names.filter((name) => /^é{119}~[0-9a-f]{16}$/.test(name))).toHaveLength(2);
  });

  it('given an object as category, refuses the record, which still moves the watermark', () => {
    const { feed, ledger } = counting();
    const row = feed(record(T0), record(T0 + MINUTE).replace('"approved"', '["a"]'));
    expect(ledger.rejected).toEqual(new Map([['not-scalar', 1]]));
    expect(ledger.accepted).toBe(1);
    expect(row.watermarkMs).toBe(T0 + MINUTE);
  });

  it('given a record that no mix wants, accepts it and moves the watermark', () => {
    const where = [
      {
        field: ['outcome'],
        is: ['approved'],
        atLeast: null,
        atMost: null,
        matches: null,
        missing: null,
      },
    ];
    const { feed, ledger } = counting({ mixes: [mixConfig({ where })] });
    const row = feed(record(T0), record(T0 + MINUTE, 'declined'));
    expect(row.watermarkMs).toBe(T0 + MINUTE);
    expect(ledger.accepted).toBe(2);
    expect(counts(ledger)).toEqual({ [key('approved')]: once });
  });

  const refused: readonly [string, string][] = [
    ['{"outcome":"a"}', 'no-time'],
    ['{"ts":null}', 'no-time'],
    ['{"ts":"soon"}', 'bad-time'],
    ['{"ts":{}}', 'bad-time'],
    ['{"ts":""}', 'bad-time'],
    ['{"ts"', 'malformed'],
    ['x'.repeat(101), 'line-too-long'],
  ];
  it.each(refused)('given %j, refuses it as %s', (line, reason) => {
    const { feed, ledger } = counting({ config: { maxLineBytes: 100 } });
    feed(line);
    expect(ledger.rejected).toEqual(new Map([[reason, 1]]));
    expect(ledger.accepted).toBe(0);
  });

  it('given a line of exactly the limit, with either end, reads it', () => {
    const line = record(T0).padEnd(100);
    const { feed, ledger } = counting({ config: { maxLineBytes: 100 } });
    feed(line, `${line}\r`, `${line} `);
    expect(ledger.accepted).toBe(2);
    expect(ledger.rejected).toEqual(new Map([['line-too-long', 1]]));
  });

  it.each(['\n', '\r\n'])('given lines about the limit byte by byte, judges each alike', (end) => {
    const counter = new Counter({ config: collectorConfig(), mixes: [], judgedTo: () => 0 });
    const reader = new PartitionReader(freshPartition('gateway', 'f', 'f'), counter, 100);
    const lengths = [99, 100, 101, 102, 300, 100];
    const text = lengths.map((length) => record(T0).padEnd(length) + end).join('');
    for (const byte of Buffer.from(text)) reader.feed(Buffer.from([byte]));
    expect(reader.snapshot()).toMatchObject({ position: text.length, insideLongLine: false });
    const { accepted, rejected } = counter.drain();
    expect(accepted).toEqual([{ collector: 'gateway', count: 3 }]);
    expect(rejected).toEqual([{ collector: 'gateway', reason: 'line-too-long', count: 3 }]);
  });

  it('given stamps at the ends of what can be written, neither fails nor loses count', () => {
    const time = { field: ['ts'], format: { kind: 'epoch', unit: 'ms' }, zone: 'UTC' } as const;
    const { feed, end, ledger } = counting({
      config: { time },
      mixes: [mixConfig({ zone: 'Europe/Berlin', window: { kind: 'month' } })],
    });
    const stamps = ['8640000000000000', '-8640000000000000', '1e300', '-1', '0', '9e15'];
    feed(...stamps.map((ts) => `{"ts":${ts},"outcome":"a"}`));
    end();
    const rejected = [...ledger.rejected.values()].reduce((sum, count) => sum + count, 0);
    expect(ledger.accepted + rejected).toBe(stamps.length);
  });
});

describe('lateness', () => {
  const late = (ledger: Ledger) => [...ledger.counts.values()].reduce((n, c) => n + c.late, 0);

  it('given a window whose end plus lateness the watermark has reached, counts it late', () => {
    const { feed, ledger } = counting();
    const endMs = T0 + 5 * MINUTE;
    feed(record(T0), record(endMs + 29_999), record(T0));
    expect(late(ledger)).toBe(0);
    feed(record(endMs + 30_000), record(T0), record(endMs));
    expect(late(ledger)).toBe(1);
    expect(ledger.counts.get(key('approved'))).toEqual({ onTime: 2, late: 1 });
  });

  it('given a window that was judged, counts it late whatever the watermark', () => {
    const { feed, ledger } = counting({ judgedToMs: T0 + 5 * MINUTE });
    feed(record(T0), record(T0 + 5 * MINUTE), record(T0 + 5 * MINUTE));
    expect(ledger.counts.get(key('approved'))).toEqual({ onTime: 0, late: 1 });
    expect(late(ledger)).toBe(1);
  });
});

describe('the caps', () => {
  const limits = { ...mixConfig().limits, categoriesStored: 2, strands: 2 };

  it('given more categories than are stored, counts further ones in (rest)', () => {
    const known = { strands: [], categories: [{ mix: 'outcomes', category: 'a' }] };
    const { feed, end, ledger } = counting({ mixes: [mixConfig({ limits })], known });
    feed(...['b', 'c', 'a', 'd', 'b'].map((outcome) => record(T0, outcome)));
    end();
    expect([ledger.events('a'), ledger.events('b'), ledger.events('(rest)')]).toEqual([1, 2, 2]);
  });

  it('given more strands than the limit, counts further ones in the strand of the rest', () => {
    const mixes = [mixConfig({ limits, split: [['r']] })];
    const strands = [{ mix: 'outcomes', strand: 'r=n', lastMs: T0 }];
    const { feed, end, ledger } = counting({ mixes, known: { strands, categories: [] } });
    feed(...['s', 'w', 'n', 'e'].map((r) => record(T0, 'a', { r })));
    end();
    expect(counts(ledger)).toEqual({
      [key('a')]: { onTime: 4, late: 0 },
      [key('a', 'r=s')]: once,
      [key('a', 'r=n')]: once,
      [key('a', 'r=(rest)')]: { onTime: 2, late: 0 },
    });
  });

  it('given a strand long without an event, gives its place away', () => {
    const mixes = [mixConfig({ limits: { ...limits, forgetMs: HOUR }, split: [['r']] })];
    const { feed, end, ledger } = counting({ mixes });
    // 24 windows of 5 minutes are longer than the hour asked for.
    const soon = T0 + 2 * HOUR;
    feed(record(T0, 'a', { r: 'n' }), record(T0 + MINUTE, 'a', { r: 's' }));
    feed(record(soon, 'a', { r: 'w' }), record(soon + 1, 'a', { r: 'e' }));
    end();
    const strands = new Set([...ledger.counts.keys()].map((cell) => cell.split('|')[1]));
    expect([...strands].sort()).toEqual(['all', 'r=(rest)', 'r=e', 'r=n', 'r=s']);
  });
});
