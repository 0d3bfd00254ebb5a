import { expect, it } from 'vitest';
import { StoreError, type Store } from '../../../src/store/store.js';
import type { Count } from '../../../src/terms/tally.js';
import { begin, restarted, type Open } from './opened.js';
import { batchOf, countsOf, listOf, partition, T0, tally, MINUTE } from './values.js';

async function countsAt(store: Store, at: number): Promise<ReadonlyMap<string, Count> | undefined> {
  const [first] = await store.windowTallies('m', T0 + at * MINUTE);
  return first?.counts;
}

function manyNames(count: number): Record<string, number> {
  return Object.fromEntries(Array.from({ length: count }, (_, i) => [`category ${i}`, i + 1]));
}

export function countingContract(open: Open): void {
  it('adds to what is stored when a window gets more counts', async () => {
    const { store } = await begin(open);
    await store.commitCounts(batchOf([tally(0, { ok: 3, bad: 1 })]));
    await store.commitCounts(batchOf([tally(0, { ok: 2, odd: 7 }), tally(0, { ok: 10 })]));
    expect(await countsAt(store, 0)).toEqual(countsOf({ ok: 15, bad: 1, odd: 7 }));
  });

  it('keeps late events apart from those on time', async () => {
    const { store } = await begin(open);
    await store.commitCounts(batchOf([tally(0, { ok: [3, 0] })]));
    await store.commitCounts(batchOf([tally(0, { ok: [1, 5], late: [0, 2] })]));
    expect(await countsAt(store, 0)).toEqual(countsOf({ ok: [4, 5], late: [0, 2] }));
  });

  it('has neither a tally nor a mix for counts of nothing', async () => {
    const { store } = await begin(open);
    await store.commitCounts(batchOf([tally(0, { ok: 0 }), tally(1, {})]));
    expect(await listOf(store.tallies({ mix: 'm' }))).toEqual([]);
    expect((await store.totals()).mixes.size).toBe(0);
  });

  it('keeps windows of two lengths apart that begin together', async () => {
    const { store } = await begin(open);
    const long = tally(0, { ok: 50 }, { window: { startMs: T0, endMs: T0 + 60 * MINUTE } });
    await store.commitCounts(batchOf([long, tally(0, { ok: 5 })]));
    expect(await store.windowTallies('m', T0)).toEqual([tally(0, { ok: 5 }), long]);
    expect(await listOf(store.tallies({ mix: 'm', toMs: T0 + MINUTE }))).toHaveLength(1);
  });

  it('replaces the row of a partition and leaves other partitions and collectors', async () => {
    const opened = await begin(open);
    const full = partition('8:1', {
      position: 2 ** 40,
      insideLongLine: true,
      fingerprint: { bytes: 1024, sha256: 'ab'.repeat(32) },
      firstMs: T0,
      watermarkMs: T0 + 1,
      ended: true,
      quietSinceMs: T0 + 2,
      waiting: { atMs: T0 + 3, cells: [] },
    });
    const other = partition('8:1', { collector: 'other', position: 5 });
    const rows = [partition('8:2'), partition('8:1', { position: 7 }), other];
    await opened.store.commitCounts(batchOf([], { partitions: rows }));
    await opened.store.commitCounts(batchOf([], { partitions: [full] }));
    const store = await restarted(opened);
    expect(await store.partitions('gate')).toEqual([full, partition('8:2')]);
    expect(await store.partitions('other')).toEqual([other]);
    expect(await store.partitions('none')).toEqual([]);
  });

  it.each([
    ['negative', -1],
    ['not a number', NaN],
    ['infinite', Infinity],
    ['a fraction', 0.5],
    ['over 2^53 - 1', 2 ** 53],
  ])('changes nothing when one count of a commit is %s', async (_what, wrong) => {
    const { store } = await begin(open);
    const first = batchOf([tally(0, { ok: 3 })], { partitions: [partition('p')] });
    await store.commitCounts(first);
    const read = partition('p', { position: 99 });
    const counted = { collector: 'gate', count: 2 };
    const good = { partitions: [read], accepted: [counted] };
    const bad = batchOf([tally(0, { ok: 1 }), tally(1, { new: [1, wrong] })], good);
    await expect(store.commitCounts(bad)).rejects.toThrow(
      `late count in the tally of mix m, strand all, window from 2031-03-05T00:01:00.000Z, ` +
        `category new is ${wrong}, but counts are whole numbers`,
    );
    expect(await listOf(store.tallies({ mix: 'm' }))).toEqual(first.tallies);
    expect(await store.partitions('gate')).toEqual([partition('p')]);
    expect((await store.totals()).accepted).toEqual(new Map());
    // The twin: the same commit without the wrong count does change all of them.
    await store.commitCounts(batchOf([tally(0, { ok: 1 }), tally(1, { new: [1, 1] })], good));
    expect(await countsAt(store, 1)).toEqual(countsOf({ new: [1, 1] }));
    expect(await store.partitions('gate')).toEqual([read]);
  });

  it('changes nothing when a sum passes 2^53 - 1 halfway through a commit', async () => {
    const { store } = await begin(open);
    const largest = batchOf([tally(5, { ok: Number.MAX_SAFE_INTEGER })]);
    await store.commitCounts(largest);
    const more = batchOf([tally(0, { fresh: 1 }, { mix: 'a' }), tally(5, { ok: 1 })], {
      partitions: [partition('p', { position: 9 })],
    });
    await expect(store.commitCounts(more)).rejects.toThrow(StoreError);
    expect(await listOf(store.tallies({ mix: 'm' }))).toEqual(largest.tallies);
    expect(await listOf(store.tallies({ mix: 'a' }))).toEqual([]);
    expect(await store.partitions('gate')).toEqual([]);
    // Names given during the failed commit are given again, not remembered from it.
    await store.commitCounts(batchOf([tally(0, { other: 2, fresh: 1 }, { mix: 'a' })]));
    const [stored] = await store.windowTallies('a', T0);
    expect(stored?.counts).toEqual(countsOf({ fresh: 1, other: 2 }));
  });

  it.each([
    ['a position', { position: -1 }, 'position of partition p'],
    ['a watermark', { watermarkMs: 0.5 }, 'watermarkMs of partition p'],
  ])('refuses a commit with %s that is no whole number', async (_what, changed, message) => {
    const { store } = await begin(open);
    const batch = batchOf([tally(0, { ok: 1 })], { partitions: [partition('p', changed)] });
    await expect(store.commitCounts(batch)).rejects.toThrow(message);
    expect(await countsAt(store, 0)).toBeUndefined();
  });

  it('refuses a window whose end is not after its start', async () => {
    const { store } = await begin(open);
    const empty = tally(0, { ok: 1 }, { window: { startMs: T0, endMs: T0 } });
    await expect(store.commitCounts(batchOf([empty]))).rejects.toThrow(/the start before the end/);
    expect(await countsAt(store, 0)).toBeUndefined();
  });

  it('adds up totals from the whole alone, and has them after a restart', async () => {
    const opened = await begin(open);
    const north = tally(0, { ok: [2, 1] }, { strand: 'region=north' });
    const refused = [{ collector: 'gate', reason: 'no-time', count: 4 }];
    const accepted = [{ collector: 'gate', count: 10 }];
    const batch = batchOf([tally(0, { ok: [2, 1], bad: 3 }), north], {
      rejected: refused,
      accepted,
    });
    await opened.store.commitCounts(batch);
    await opened.store.commitCounts(batch);
    const totals = await (await restarted(opened)).totals();
    const categories = new Map([
      ['bad', 6],
      ['ok', 6],
    ]);
    expect(totals.mixes).toEqual(new Map([['m', { events: 12, late: 2, categories }]]));
    expect(totals.accepted).toEqual(new Map([['gate', 20]]));
    expect(totals.rejected).toEqual([{ collector: 'gate', reason: 'no-time', count: 8 }]);
  });

  it('keeps totals of 64 categories of a mix and the others in (rest)', async () => {
    const { store } = await begin(open);
    await store.commitCounts(batchOf([tally(0, { ...manyNames(60), '(rest)': 5 })]));
    await store.commitCounts(batchOf([tally(1, manyNames(100))]));
    await store.commitCounts(batchOf([tally(2, { 'category 99': 1, 'category 1': 1 })]));
    const mix = (await store.totals()).mixes.get('m');
    const sum = [...(mix?.categories.values() ?? [])].reduce((a, b) => a + b, 0);
    expect(mix?.categories.size).toBe(65);
    expect(sum).toBe(mix?.events);
    // 60 named; of the 40 that came then, 4 in code-point order: 60, 61, 62, 63.
    expect(mix?.categories.get('category 63')).toBe(64);
    expect(mix?.categories.get('category 1')).toBe(2 + 2 + 1);
    // 65 + 66 + ... + 100 = 36 x 82.5.
    expect(mix?.categories.get('(rest)')).toBe(5 + 2970 + 1);
  });

  it('keeps names of any text as they are', async () => {
    const opened = await begin(open);
    const names = ['', ' ', '00', '0x10', 'é', 'e\u0301', '🙂', 'a\u0000b', 'x'.repeat(1_000_000)];
    const numbers = Object.fromEntries(names.map((name, i) => [name, i + 1]));
    const strand = 'region=é\u0000,zone=🙂';
    await opened.store.commitCounts(batchOf([tally(0, numbers, { mix: 'ü ’', strand })]));
    const [stored] = await (await restarted(opened)).windowTallies('ü ’', T0);
    expect(stored).toEqual(tally(0, numbers, { mix: 'ü ’', strand }));
  });

  it('counts a text with half a surrogate pair under the replacement character', async () => {
    const { store } = await begin(open);
    const batch = batchOf([tally(0, { 'a\ud800': 1, 'a\udc00': 2 })]);
    await store.commitCounts(batch);
    await store.commitCounts(batch);
    expect(await countsAt(store, 0)).toEqual(countsOf({ 'a\ufffd': 6 }));
    const categories = (await store.totals()).mixes.get('m')?.categories;
    expect(categories).toEqual(new Map([['a\ufffd', 6]]));
  });

  it('keeps 10,000 categories in one window, in order of code points', async () => {
    const opened = await begin(open);
    const numbers = manyNames(10_000);
    await opened.store.commitCounts(batchOf([tally(0, numbers)]));
    await opened.store.commitCounts(batchOf([tally(0, { 'category 9999': 1 })]));
    const counts = await countsAt(await restarted(opened), 0);
    expect(counts).toEqual(countsOf({ ...numbers, 'category 9999': 10_001 }));
    // ASCII names: plain comparison is code-point order.
    const names = [...(counts?.keys() ?? [])];
    expect(names).toEqual([...names].sort((a, b) => (a < b ? -1 : 1)));
  });
}
