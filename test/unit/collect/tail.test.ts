import {
  appendFileSync,
  copyFileSync,
  mkdirSync,
  renameSync,
  rmSync,
  truncateSync,
  writeFileSync,
} from 'node:fs';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { DAY, HOUR, MINUTE, T0, TailBench, lines, record } from './collectHelper.js';

let bench: TailBench;
beforeEach(() => {
  bench = new TailBench();
});
afterEach(() => bench.end());

const write = (name: string, text: readonly string[]) => {
  writeFileSync(bench.file(name), text.join(''));
};
const append = (name: string, text: readonly string[]) => {
  appendFileSync(bench.file(name), text.join(''));
};
const row = (name: string) =>
  [...bench.ledger.rows.values()].find((partition) => partition.name === bench.file(name));

describe('tailing a file', () => {
  it('given lines that come later, counts each once, over restarts too', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const first = await bench.open('once', ['a.log']);
    await bench.read(first);
    append('a.log', lines(T0 + HOUR, 5, MINUTE));
    await bench.read(first);
    append('a.log', lines(T0 + 2 * HOUR, 5, MINUTE));
    const second = await bench.open('once', ['a.log']);
    expect(second.watermarkMs()).toBe(T0 + HOUR + 4 * MINUTE);
    await bench.read(second);
    expect(bench.ledger.events('approved')).toBe(20);
    expect(bench.ledger.accepted).toBe(20);
    expect(second.lagBytes()).toBe(0);
  });

  it('given reading that was never committed, reads it again after the crash', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const first = await bench.open('once', ['a.log']);
    await first.step({ lookAround: true });
    await bench.read(await bench.open('once', ['a.log']));
    expect(bench.ledger.events('approved')).toBe(10);
  });

  it('given a last line without its end, leaves it until it is whole', async () => {
    write('a.log', [...lines(T0, 3, MINUTE), record(T0 + 4 * MINUTE).slice(0, 20)]);
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(3);
    append('a.log', [record(T0 + 4 * MINUTE).slice(20), '\n']);
    await bench.read(await bench.open('once', ['a.log']));
    expect(bench.ledger.events('approved')).toBe(4);
    expect(bench.ledger.rejected.size).toBe(0);
  });

  it('given a last line without its end in rehearse, counts it', async () => {
    write('a.log', [...lines(T0, 3, MINUTE), record(T0 + 4 * MINUTE)]);
    const collector = await bench.open('rehearse', ['a.log']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(4);
    expect(collector.exhausted()).toBe(true);
  });

  it('given a file that appears later, holds the watermark back until then', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('once', ['a.log', 'b.log']);
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(null);
    expect(collector.problems().join()).toContain('b.log');
    write('b.log', lines(T0, 2, MINUTE));
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + MINUTE);
    expect(collector.problems()).toEqual([]);
  });

  it('given a missing file in live, waits for it only as long as for a quiet one', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('live', ['a.log', 'b.log']);
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(null);
    bench.clock.advance(60_000);
    append('a.log', lines(T0 + 10 * MINUTE, 1, MINUTE));
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + 10 * MINUTE);
  });

  it('given a missing folder or something that is no file, says so and goes on', async () => {
    mkdirSync(bench.file('folder.log'));
    write('old.log.gz', ['x']);
    write('a.log', lines(T0, 2, MINUTE));
    const collector = await bench.open('rehearse', ['none/*.log', '*.log', '*.gz']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(2);
    const problems = collector.problems().join('\n');
    expect(problems).toContain('it does not exist');
    expect(problems).toContain('is not a regular file');
    expect(problems).toContain('compressed logs are not available yet');
  });

  it('given several files, reads next from the one that is furthest behind', async () => {
    const padding = { padding: 'x'.repeat(1_000) };
    const long = (from: number) =>
      Array.from({ length: 600 }, (_, i) => `${record(from + i * 1_000, 'approved', padding)}\n`);
    write('a.log', long(T0));
    write('b.log', long(T0 + MINUTE));
    const collector = await bench.open('once', ['*.log']);
    const seen: (number | null)[] = [];
    while ((await collector.step({ lookAround: false })) > 0) {
      bench.ledger.commit(collector.drain());
      seen.push(collector.watermarkMs());
    }
    const known = seen.filter((ms) => ms !== null);
    expect(known).toEqual(known.toSorted((a, b) => a - b));
    expect(new Set(known).size).toBeGreaterThan(2);
    expect(bench.ledger.events('approved')).toBe(1_200);
  });
});

describe('rotation by renaming', () => {
  it('given a new file under the old name, reads both to their ends', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    append('a.log', lines(T0 + 10 * MINUTE, 5, MINUTE));
    renameSync(bench.file('a.log'), bench.file('a.log.1'));
    write('a.log', lines(T0 + 15 * MINUTE, 5, MINUTE));
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(20);
    expect(row('a.log.1')?.ended).toBe(true);
    expect(collector.watermarkMs()).toBe(T0 + 19 * MINUTE);
  });

  it('given a renaming while down, finds the file outside the glob and ends it', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    await bench.read(await bench.open('once', ['a.log']));
    append('a.log', lines(T0 + 10 * MINUTE, 5, MINUTE));
    renameSync(bench.file('a.log'), bench.file('rotated-a'));
    write('a.log', lines(T0 + 15 * MINUTE, 5, MINUTE));
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(20);
    expect(row('rotated-a')?.ended).toBe(true);
    expect(collector.watermarkMs()).toBe(T0 + 19 * MINUTE);
    await bench.read(await bench.open('once', ['a.log']));
    expect(bench.ledger.events('approved')).toBe(20);
  });

  it('given a new name inside the glob, counts nothing twice', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    await bench.read(await bench.open('once', ['a.log*']));
    append('a.log', lines(T0 + 10 * MINUTE, 5, MINUTE));
    renameSync(bench.file('a.log'), bench.file('a.log.1'));
    write('a.log', lines(T0 + 15 * MINUTE, 5, MINUTE));
    const collector = await bench.open('once', ['a.log*']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(20);
    expect(row('a.log.1')?.ended).toBe(true);
    expect(collector.watermarkMs()).toBe(T0 + 19 * MINUTE);
  });

  it('given a writer that goes on in the renamed file, counts that too', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('live', ['a.log']);
    await bench.read(collector);
    renameSync(bench.file('a.log'), bench.file('a.log.1'));
    write('a.log', []);
    await bench.read(collector);
    append('a.log.1', lines(T0 + 10 * MINUTE, 5, MINUTE));
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(15);
  });

  it('given a file that was removed while open, reads it to its end', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('live', ['a.log']);
    await bench.read(collector);
    append('a.log', lines(T0 + 10 * MINUTE, 5, MINUTE));
    rmSync(bench.file('a.log'));
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(15);
    expect(row('a.log')?.ended).toBe(true);
  });

  it('given a record that waited in the rotated file, counts it at that end', async () => {
    write('a.log', [...lines(T0, 10, MINUTE), `${record(T0 + 3 * DAY, 'declined')}\n`]);
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    expect(bench.ledger.events('declined')).toBe(0);
    renameSync(bench.file('a.log'), bench.file('a.log.1'));
    await bench.read(collector);
    expect(bench.ledger.events('declined')).toBe(1);
    expect(row('a.log.1')?.waiting).toBe(null);
  });
});

describe('rotation by copying and emptying', () => {
  it.each([false, true])(
    'given fewer bytes than were read (restart: %s), begins anew',
    async (restart) => {
      write('a.log', lines(T0, 10, MINUTE));
      let collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      copyFileSync(bench.file('a.log'), bench.file('copy'));
      truncateSync(bench.file('a.log'));
      append('a.log', lines(T0 + 10 * MINUTE, 4, MINUTE));
      if (restart) collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      expect(bench.ledger.events('approved')).toBe(14);
      expect(bench.ledger.rows.size).toBe(1);
      expect(collector.watermarkMs()).toBe(T0 + 13 * MINUTE);
    },
  );

  it.each([false, true])(
    'given more bytes than before (restart: %s), knows by its start',
    async (restart) => {
      write('a.log', lines(T0, 10, MINUTE));
      let collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      truncateSync(bench.file('a.log'));
      append('a.log', lines(T0 + 10 * MINUTE, 40, MINUTE));
      if (restart) collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      expect(bench.ledger.events('approved')).toBe(50);
      expect(bench.ledger.rejected.size).toBe(0);
      expect(bench.ledger.rows.size).toBe(1);
    },
  );

  it('the twin: the same file that only grew is not begun anew', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    append('a.log', lines(T0 + 10 * MINUTE, 40, MINUTE));
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(50);
    expect(row('a.log')?.position).toBe(lines(T0, 50, MINUTE).join('').length);
  });

  it.each([false, true])(
    'given a record that waited (restart: %s), counts it once',
    async (restart) => {
      write('a.log', [...lines(T0, 10, MINUTE), `${record(T0 + 3 * DAY, 'declined')}\n`]);
      let collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      expect(row('a.log')?.waiting?.cells).toHaveLength(1);
      truncateSync(bench.file('a.log'));
      if (restart) collector = await bench.open('once', ['a.log']);
      await bench.read(collector);
      expect(bench.ledger.events('declined')).toBe(1);
      expect(bench.ledger.accepted).toBe(11);
      expect(collector.watermarkMs()).toBe(T0 + 9 * MINUTE);
    },
  );
});

describe('identity', () => {
  it('given another file under a stored identity, reads it from its start', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    await bench.read(await bench.open('once', ['a.log']));
    const [id] = bench.ledger.rows.keys();
    const stored = bench.ledger.rows.get(id ?? '');
    if (id === undefined || stored === undefined) throw new Error('the row was not stored');
    // As if the inode had belonged to a longer file elsewhere that ended long ago.
    const fingerprint = { bytes: 5, sha256: 'f'.repeat(64) };
    bench.ledger.rows.set(id, {
      ...stored,
      name: bench.file('gone.log'),
      ended: true,
      position: 7,
      fingerprint,
      watermarkMs: T0 + DAY,
    });
    const collector = await bench.open('once', ['a.log']);
    await bench.read(collector);
    expect(bench.ledger.events('approved')).toBe(20);
    expect(bench.ledger.rows.get(id)).toMatchObject({
      ended: false,
      watermarkMs: T0 + 9 * MINUTE,
      name: bench.file('a.log'),
    });
  });

  it('given an ended partition whose file is long gone, lets it be', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    await bench.read(await bench.open('once', ['a.log']));
    rmSync(bench.file('a.log'));
    await bench.read(await bench.open('once', ['*.log']));
    const collector = await bench.open('once', ['*.log']);
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + 9 * MINUTE);
    expect(bench.ledger.events('approved')).toBe(10);
  });
});

describe('silence', () => {
  it('given a quiet file in live, lets go after lateness plus 30 s, until it grows', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    write('b.log', lines(T0, 20, MINUTE));
    const collector = await bench.open('live', ['*.log']);
    await bench.read(collector);
    bench.clock.advance(59_999);
    append('b.log', lines(T0 + 20 * MINUTE, 1, MINUTE));
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + 9 * MINUTE);
    bench.clock.advance(1);
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + 20 * MINUTE);
    expect(row('a.log')?.quietSinceMs).toBe(bench.clock.nowMs());
    append('a.log', lines(T0 + 10 * MINUTE, 1, MINUTE));
    await bench.read(collector);
    expect(row('a.log')?.quietSinceMs).toBe(null);
    expect(collector.watermarkMs()).toBe(T0 + 20 * MINUTE);
  });

  it('given the same in once, never lets it go', async () => {
    write('a.log', lines(T0, 10, MINUTE));
    write('b.log', lines(T0, 20, MINUTE));
    const collector = await bench.open('once', ['*.log']);
    await bench.read(collector);
    bench.clock.advance(DAY);
    await bench.read(collector);
    expect(collector.watermarkMs()).toBe(T0 + 9 * MINUTE);
  });
});

describe('dated files', () => {
  it('rehearsed, and run once in pieces over the same files, end alike', async () => {
    const days = [0, 1, 2].map((day) => lines(T0 + day * 20 * HOUR, 20, HOUR));
    const pieces = await bench.open('once', ['app-*.log']);
    for (const [day, text] of days.entries()) {
      write(`app-${day}.log`, text.slice(0, 7));
      await bench.read(pieces);
      append(`app-${day}.log`, text.slice(7));
      await bench.read(pieces);
    }
    const whole = new TailBench();
    try {
      for (const [day, text] of days.entries()) {
        writeFileSync(whole.file(`app-${day}.log`), text.join(''));
      }
      const rehearsal = await whole.open('rehearse', ['app-*.log']);
      await whole.read(rehearsal);
      expect(whole.ledger.summary()).toEqual(bench.ledger.summary());
      expect(rehearsal.watermarkMs()).toBe(T0 + 59 * HOUR);
      expect(pieces.watermarkMs()).toBe(T0 + 59 * HOUR);
    } finally {
      await whole.end();
    }
  });
});
