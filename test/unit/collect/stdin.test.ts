import { PassThrough } from 'node:stream';
import { describe, expect, it } from 'vitest';
import { virtualClock } from '../../../src/clock/virtualClock.js';
import type { ReadingMode } from '../../../src/collect/collector.js';
import { openCollector } from '../../../src/collect/open.js';
import {
  DAY,
  Ledger,
  MINUTE,
  T0,
  collectorConfig,
  lines,
  mixConfig,
  record,
} from './collectHelper.js';

function open(mode: ReadingMode, ledger: Ledger, stdin?: PassThrough) {
  return openCollector({
    config: collectorConfig(),
    mixes: [mixConfig()],
    mode,
    clock: virtualClock(T0),
    store: ledger,
    judgedTo: () => -Infinity,
    ...(stdin === undefined ? {} : { stdin }),
  });
}

describe('reading the standard input', () => {
  it('given a pipe that ends, counts all of it, the last line without its end too', async () => {
    const ledger = new Ledger();
    const pipe = new PassThrough();
    const collector = await open('once', ledger, pipe);
    pipe.write(lines(T0, 3, MINUTE).join(''));
    pipe.end(record(T0 + 3 * MINUTE));
    while (!collector.exhausted()) await collector.step({ lookAround: true });
    ledger.commit(collector.drain());
    expect(ledger.events('approved')).toBe(4);
    expect(collector.watermarkMs()).toBe(T0 + 3 * MINUTE);
    expect(collector.lagBytes()).toBe(null);
    await collector.close();
  });

  it('given nothing to read in live, returns at once; in once, waits for more', async () => {
    const ledger = new Ledger();
    const pipe = new PassThrough();
    const live = await open('live', ledger, pipe);
    expect(await live.step({ lookAround: false })).toBe(0);
    expect(live.exhausted()).toBe(false);
    const once = await open('once', ledger, pipe);
    const step = once.step({ lookAround: false });
    const text = lines(T0, 2, MINUTE).join('');
    pipe.write(text);
    expect(await step).toBe(text.length);
  });

  it('given more than fits, makes the writer wait', async () => {
    const ledger = new Ledger();
    const pipe = new PassThrough();
    const collector = await open('once', ledger, pipe);
    const text = lines(T0, 2_000, 1).join('');
    let accepted = 0;
    while (accepted < 100 && pipe.write(text)) accepted += 1;
    expect(accepted).toBeLessThan(100);
    expect(pipe.readableLength + pipe.writableLength).toBeLessThan(3 * text.length);
    pipe.end();
    while (!collector.exhausted()) await collector.step({ lookAround: false });
    ledger.commit(collector.drain());
    expect(ledger.events('approved')).toBe(2_000 * (accepted + 1));
  });

  it('given a second pipe, begins afresh and keeps what waited in the broken one', async () => {
    const ledger = new Ledger();
    const broken = new PassThrough();
    const first = await open('once', ledger, broken);
    broken.write(`${lines(T0, 3, MINUTE).join('')}${record(T0 + 9 * DAY, 'declined')}\n`);
    await first.step({ lookAround: false });
    ledger.commit(first.drain());
    const second = await open('once', ledger, new PassThrough());
    ledger.commit(second.drain());
    expect(second.watermarkMs()).toBe(null);
    expect(ledger.rows.get('stdin')).toMatchObject({ position: 0, waiting: null });
    expect(ledger.events('declined')).toBe(1);
  });

  it('given an input that fails, says so and ends', async () => {
    const pipe = new PassThrough();
    const collector = await open('once', new Ledger(), pipe);
    const step = collector.step({ lookAround: false });
    pipe.destroy(new Error('broken cable'));
    expect(await step).toBe(0);
    expect(collector.exhausted()).toBe(true);
    expect(collector.problems()).toEqual(['cannot read the standard input: broken cable']);
  });

  it('given no input, refuses to open', async () => {
    await expect(open('once', new Ledger())).rejects.toThrow(
      'collector gateway reads the standard input, but there is none here',
    );
  });
});
