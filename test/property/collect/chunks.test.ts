import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { Counter } from '../../../src/collect/tally/counter.js';
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
} from '../../unit/collect/collectHelper.js';

const MAX_LINE_BYTES = 120;
const config = collectorConfig({ maxLineBytes: MAX_LINE_BYTES });
const mixes = [
  mixConfig({ split: [['region']] }),
  mixConfig({ name: 'slow', window: { kind: 'day' }, latenessMs: HOUR }),
];

/** Milliseconds after T0: mostly near, now and then far on either side of the day's rule. */
const stamp = fc.oneof(
  { weight: 8, arbitrary: fc.integer({ min: 0, max: HOUR }) },
  { weight: 2, arbitrary: fc.constantFrom(DAY, DAY + 1, 2 * DAY, 9 * DAY, 9 * DAY + HOUR) },
  { weight: 1, arbitrary: fc.constantFrom(-DAY, -9 * DAY) },
);
const good = fc
  .tuple(stamp, fc.constantFrom('approved', 'declined', 'é', '(odd'), fc.constantFrom('n', 's'))
  .map(([ms, outcome, region]) => Buffer.from(record(T0 + ms, outcome, { region })));
const longBytes = fc.integer({ min: MAX_LINE_BYTES - 1, max: MAX_LINE_BYTES * 3 });
const odd = fc.oneof(
  fc
    .constantFrom('', '  \t', 'not json', '{"outcome":"x"}', '{"ts":"never"}', '[]', '\r')
    .map((text) => Buffer.from(text)),
  fc.constant(Buffer.from(record(T0, 'a').replace('"a"', '{}'))),
  fc.constant(Buffer.from([0x7b, 0xff, 0xc3, 0x7d])),
  fc.constant(Buffer.from([0xe2, 0x82])),
  longBytes.map((length) => Buffer.from('x'.repeat(length))),
  longBytes.map((length) => Buffer.from(record(T0, 'padded').padEnd(length))),
);
const line = fc
  .tuple(
    fc.oneof({ weight: 3, arbitrary: good }, { weight: 2, arbitrary: odd }),
    fc.constantFrom('\n', '\r\n'),
  )
  .map(([bytes, end]) => Buffer.concat([bytes, Buffer.from(end)]));
const log = fc.array(line, { maxLength: 40 }).map((all) => Buffer.concat(all));
const steps = fc.array(
  fc.record({
    bytes: fc.oneof(fc.integer({ min: 1, max: 9 }), fc.integer({ min: 10, max: 400 })),
    then: fc.constantFrom('go on', 'commit', 'crash', 'commit and crash'),
  }),
  { maxLength: 60 },
);

interface Outcome {
  readonly ledger: unknown;
  readonly row: Partition;
}

/** Feeds a log in the given steps, and then the rest; `crash` goes back to what was committed. */
function run(bytes: Buffer, plan: readonly { bytes: number; then: string }[]): Outcome {
  const ledger = new Ledger();
  let row = freshPartition('gateway', 'file', 'file');
  const start = () => {
    const counter = new Counter({ config, mixes, judgedTo: () => -Infinity });
    return { counter, reader: new PartitionReader(row, counter, MAX_LINE_BYTES) };
  };
  let { counter, reader } = start();
  const commit = () => {
    row = reader.snapshot();
    ledger.commit({ ...counter.drain(), partitions: [row] });
  };
  for (const step of [...plan, { bytes: bytes.length, then: 'commit' }]) {
    const at = reader.readBytes;
    // A copy that is wiped afterwards, as a reader's buffer is.
    const chunk = Buffer.from(bytes.subarray(at, at + step.bytes));
    if (chunk.length > 0) reader.feed(chunk);
    chunk.fill(0x21);
    if (step.then.startsWith('commit')) commit();
    if (step.then.endsWith('crash')) ({ counter, reader } = start());
  }
  if (reader.readBytes < bytes.length) {
    reader.feed(Buffer.from(bytes.subarray(reader.readBytes)));
    commit();
  }
  const before = row;
  reader.endOfInput();
  commit();
  return { ledger: ledger.summary(), row: { ...row, watermarkMs: before.watermarkMs } };
}

/** The rules once more, told plainly over the whole log: accepted and refused records. */
function plainly(bytes: Buffer): { accepted: number; rejected: [string, number][] } {
  const rejected = new Map<string, number>();
  const refuse = (reason: string) => rejected.set(reason, (rejected.get(reason) ?? 0) + 1);
  const stamps: { ms: number; usable: boolean }[] = [];
  for (const text of bytes.toString('latin1').split('\n').slice(0, -1)) {
    const raw = Buffer.from(text.replace(/\r$/, ''), 'latin1');
    if (raw.length > MAX_LINE_BYTES) refuse('line-too-long');
    else if (!Buffer.from(raw.toString()).equals(raw)) refuse('invalid-utf-8');
    else if (raw.toString().trim() !== '') {
      const reason = plainRecord(raw.toString());
      if (typeof reason === 'string') refuse(reason);
      else stamps.push(reason);
    }
  }
  let accepted = 0;
  let mark = -Infinity;
  stamps.forEach(({ ms, usable }, i) => {
    const next = stamps[i + 1];
    const isFar = mark === -Infinity || ms > mark + DAY;
    if (isFar && next !== undefined && next.ms < ms - DAY) {
      refuse('future');
      return;
    }
    if (usable) accepted += 1;
    else refuse('not-scalar');
    // The last record of all waits to the end of input and moves nothing.
    mark = Math.max(mark, ms);
  });
  return { accepted, rejected: [...rejected].sort(([a], [b]) => (a < b ? -1 : 1)) };
}

function plainRecord(text: string): string | { ms: number; usable: boolean } {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (error) {
    return error instanceof SyntaxError ? 'malformed' : String(error);
  }
  if (typeof value !== 'object' || value === null || Array.isArray(value)) return 'malformed';
  const fields = new Map<string, unknown>(Object.entries(value));
  const ts = fields.get('ts');
  if (typeof ts !== 'string') return 'no-time';
  const ms = Date.parse(ts);
  return Number.isNaN(ms) ? 'bad-time' : { ms, usable: typeof fields.get('outcome') !== 'object' };
}

describe('counting a partition', () => {
  it('however the bytes are cut and whenever it restarts, gives the same counts', () => {
    fc.assert(
      fc.property(log, steps, (bytes, plan) => {
        expect(run(bytes, plan)).toEqual(run(bytes, []));
      }),
      { seed: 43, numRuns: 1_500 },
    );
  });

  it('given any log, accepts and refuses what the rules told plainly do', () => {
    fc.assert(
      fc.property(log, steps, (bytes, plan) => {
        const { accepted, rejected } = run(bytes, plan).ledger as ReturnType<typeof plainly>;
        expect({ accepted, rejected }).toEqual(plainly(bytes));
      }),
      { seed: 44, numRuns: 800 },
    );
  });

  it('the twin: without going back to the waiting record a restart would lose it', () => {
    const bytes = Buffer.from(`${record(T0)}\n${record(T0 + MINUTE)}\n`);
    const plan = [{ bytes: bytes.indexOf(10) + 1, then: 'commit and crash' }];
    expect(run(bytes, plan).ledger).toEqual(run(bytes, []).ledger);
    expect(run(bytes.subarray(bytes.indexOf(10) + 1), []).ledger).not.toEqual(
      run(bytes, []).ledger,
    );
  });
});
