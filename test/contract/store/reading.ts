import { expect, it } from 'vitest';
import { begin, type Open } from './opened.js';
import { batchOf, listOf, MINUTE, T0, tally } from './values.js';

/** U+FF5E is below U+1F642 as a code point, and above its first UTF-16 unit (U+D83D). */
const LOW = '\uff5e';
const HIGH = '🙂';

export function readingContract(open: Open): void {
  it('gives the strands of a window in order of code points, not of UTF-16 units', async () => {
    const { store } = await begin(open);
    const strands = [`r=${HIGH}`, `r=${LOW}`, 'r=b', 'all', 'r=B'];
    const tallies = strands.map((strand) => tally(0, { x: 1 }, { strand }));
    await store.commitCounts(batchOf(tallies));
    const inOrder = (await store.windowTallies('m', T0)).map((found) => found.strand);
    expect(inOrder).toEqual(['all', 'r=B', 'r=b', `r=${LOW}`, `r=${HIGH}`]);
    // The twin: JavaScript's own order is another.
    expect([...strands].sort()).not.toEqual(inOrder);
  });

  it('gives the categories of a tally in order of code points, whenever they came', async () => {
    const { store } = await begin(open);
    await store.commitCounts(batchOf([tally(0, { [HIGH]: 1, z: 1 })]));
    await store.commitCounts(batchOf([tally(0, { [LOW]: 1, a: 1 })]));
    const [found] = await store.windowTallies('m', T0);
    expect([...(found?.counts.keys() ?? [])]).toEqual(['a', 'z', LOW, HIGH]);
  });

  it('streams tallies in order of start, then strand, within the span asked for', async () => {
    const { store } = await begin(open);
    const [second, first] = [tally(1, { x: 1 }), tally(0, { x: 1 })];
    const north = tally(0, { x: 1 }, { strand: 'r=north' });
    const foreign = tally(0, { x: 1 }, { mix: 'other' });
    await store.commitCounts(batchOf([second, north, foreign]));
    await store.commitCounts(batchOf([first, tally(2, { x: 1 })]));
    const all = await listOf(store.tallies({ mix: 'm' }));
    expect(all).toEqual([first, north, second, tally(2, { x: 1 })]);
    const span = { fromMs: T0, toMs: T0 + 2 * MINUTE };
    expect(await listOf(store.tallies({ mix: 'm', ...span }))).toEqual([first, north, second]);
    expect(await listOf(store.tallies({ mix: 'm', fromMs: T0 + 1 }))).toEqual(all.slice(2));
    expect(await listOf(store.tallies({ mix: 'm', toMs: T0 + MINUTE - 1 }))).toEqual([]);
    expect(await listOf(store.tallies({ mix: 'm', strand: 'r=north' }))).toEqual([north]);
    expect(await listOf(store.tallies({ mix: 'm', strand: 'r=south' }))).toEqual([]);
    expect(await listOf(store.tallies({ mix: 'none' }))).toEqual([]);
  });

  it('streams more windows than it reads at once, while others are written', async () => {
    const { store } = await begin(open);
    const many = Array.from({ length: 1_203 }, (_, at) => tally(at, { x: at + 1 }));
    const north = many.filter((_, at) => at % 600 === 0);
    const ofNorth = north.map((one) => ({ ...one, strand: 'r=north' }));
    await store.commitCounts(batchOf([...many, ...ofNorth]));
    let seen = 0;
    for await (const found of store.tallies({ mix: 'm' })) {
      seen += 1;
      const { startMs } = found.window;
      if (startMs === T0) await store.commitCounts(batchOf([tally(5_000, { x: 1 })]));
    }
    expect(seen).toBe(1_203 + 3 + 1);
    expect(await listOf(store.tallies({ mix: 'm', strand: 'r=north' }))).toEqual(ofNorth);
  });

  it("gives one strand's windows that begin in a half-open span, in order", async () => {
    const { store } = await begin(open);
    const north = [3, 1, 0].map((at) => tally(at, { x: at + 1 }, { strand: 'r=north' }));
    await store.commitCounts(batchOf([...north, tally(2, { x: 9 })]));
    const found = await store.strandTallies('m', 'r=north', T0, T0 + 3 * MINUTE);
    expect(found.map((one) => one.window.startMs)).toEqual([T0, T0 + MINUTE]);
    expect(found[1]).toEqual(north[1]);
    expect(await store.strandTallies('m', 'r=south', T0, T0 + MINUTE)).toEqual([]);
    expect(await store.strandTallies('none', 'all', T0, T0 + MINUTE)).toEqual([]);
  });

  it('finds the next window with an event on time, and passes those of late ones', async () => {
    const { store } = await begin(open);
    const late = tally(1, { x: [0, 4] });
    await store.commitCounts(batchOf([tally(0, { x: 1 }), late, tally(7, { x: 1 })]));
    await store.commitCounts(batchOf([tally(2, { x: 1 }, { mix: 'other' })]));
    const seventh = { startMs: T0 + 7 * MINUTE, endMs: T0 + 8 * MINUTE };
    expect(await store.nextWindow('m', T0)).toEqual({ startMs: T0, endMs: T0 + MINUTE });
    expect(await store.nextWindow('m', T0 + 1)).toEqual(seventh);
    expect(await store.nextWindow('m', T0 + 7 * MINUTE + 1)).toBeNull();
    expect(await store.nextWindow('none', T0)).toBeNull();
    await store.commitCounts(batchOf([tally(1, { x: [1, 0] }), tally(7, { x: [0, 1] })]));
    expect(await store.nextWindow('m', T0 + 1)).toEqual(late.window);
    expect(await store.nextWindow('m', T0 + 2 * MINUTE)).toEqual(seventh);
  });
}
