import { describe, expect, it } from 'vitest';

import type { Batch } from '../../../src/terms/round.js';
import { CALM, configOf, MINUTE, mixOf, Scene, SHIFTED, T0 } from './scene.js';

const LATE = { name: 'parcels', latenessMs: 3 * MINUTE + 30_000 };
const twoMixes = () => configOf([mixOf(), mixOf(LATE)]);

async function batchesOf(scene: Scene): Promise<Batch[]> {
  const found: Batch[] = [];
  for await (const batch of scene.store.batches()) found.push(batch);
  return found;
}

/** Judges after every window, as live running does. */
async function live(scene: Scene, from: number, to: number): Promise<void> {
  for (let at = from; at <= to; at++) await scene.judgeTo(at);
}

describe('mixes of one cadence', () => {
  it('that close together are one batch and one family', async () => {
    const scene = await Scene.open(configOf([mixOf(), mixOf({ name: 'parcels' })]));
    await scene.fill(0, 14, CALM);
    await scene.fill(0, 14, CALM, { mix: 'parcels' });
    await scene.judgeTo(14);
    const last = (await batchesOf(scene)).at(-1);
    expect(last?.mixes).toEqual(['outcomes', 'parcels']);
    expect(last?.number).toBe(0);
    // A budget of 1 a week over 10,080 rounds: 0.75/10080.
    const level = 0.75 / 10_080;
    expect(last?.families).toEqual([{ budget: '', expected: 2, tested: 2, level, spent: level }]);
  });

  it('of different lateness are batches of one round, in whatever order they close', async () => {
    const scene = await Scene.open(twoMixes());
    await scene.fill(0, 30, CALM);
    await scene.fill(0, 30, CALM, { mix: 'parcels' });
    await live(scene, 1, 30);
    const ofInstant = (await batchesOf(scene)).filter((b) => b.endMs === T0 + 21 * MINUTE);
    expect(ofInstant.map(({ number, mixes }) => [number, mixes])).toEqual([
      [0, ['outcomes']],
      [1, ['parcels']],
    ]);
    // Each batch has its part of the level: half of it, as each is half of the strands.
    const level = 0.75 / 10_080 / 2;
    expect(ofInstant.map(({ families }) => families)).toEqual([
      [{ budget: '', expected: 2, tested: 1, level, spent: level }],
      [{ budget: '', expected: 2, tested: 1, level, spent: level }],
    ]);
  });

  it('judged whole, an instant waits for the last of them', async () => {
    const scene = await Scene.open(twoMixes());
    await scene.fill(0, 5, CALM);
    await scene.fill(0, 5, CALM, { mix: 'parcels' });
    const rounds = await scene.load();
    const watermark = (): number => T0 + 3 * MINUTE;
    expect(await rounds.next(watermark, { whole: true })).toBeNull();
    expect((await rounds.next(watermark))?.batch.mixes).toEqual(['outcomes']);
    const later = await rounds.next(() => T0 + 5 * MINUTE + 30_000, { whole: true });
    expect(later?.batch).toMatchObject({ endMs: T0 + MINUTE, number: 1, mixes: ['parcels'] });
  });

  it('a collector of unknown progress keeps its mixes open and nobody else', async () => {
    const scene = await Scene.open(configOf([mixOf(), mixOf({ name: 'parcels', from: 'depots' })]));
    await scene.fill(0, 2, CALM);
    await scene.fill(0, 2, CALM, { mix: 'parcels' });
    const rounds = await scene.load();
    const round = await rounds.next((name) => (name === 'depots' ? null : T0 + 2 * MINUTE));
    expect(round?.batch.mixes).toEqual(['outcomes']);
    expect(rounds.judgedTo('parcels')).toBe(-Infinity);
  });
});

describe('stored batches, replayed in order of their instants', () => {
  it('give the same verdicts, also where they were judged in another order', async () => {
    const scene = await Scene.open(twoMixes());
    await scene.fill(0, 40, CALM);
    await scene.fill(40, 45, SHIFTED);
    await scene.fill(0, 45, CALM, { mix: 'parcels' });
    // A strand that is new at 25: live, `outcomes` was judged before `parcels` knew of it.
    await scene.fill(25, 45, CALM, { mix: 'parcels', strand: 'depot=oldquay' });
    await live(scene, 1, 45);

    const replayed = await Scene.open(scene.config);
    await replayed.fill(0, 40, CALM);
    await replayed.fill(40, 45, SHIFTED);
    await replayed.fill(0, 45, CALM, { mix: 'parcels' });
    await replayed.fill(25, 45, CALM, { mix: 'parcels', strand: 'depot=oldquay' });
    const rounds = await replayed.load();
    for (const batch of await batchesOf(scene)) {
      expect(await rounds.replay(batch)).not.toBeNull();
    }
    for (const mix of ['outcomes', 'parcels']) {
      expect(await replayed.verdicts(mix)).toEqual(await scene.verdicts(mix));
    }
    expect(await batchesOf(replayed)).toEqual(await batchesOf(scene));
    expect(await replayed.alerts()).toEqual(await scene.alerts());
  });

  it('without the noted numbers the family of another order would differ', async () => {
    const scene = await Scene.open(twoMixes());
    await scene.fill(0, 30, CALM);
    await scene.fill(0, 30, CALM, { mix: 'parcels' });
    await scene.fill(15, 30, CALM, { mix: 'parcels', strand: 'depot=oldquay' });
    await live(scene, 1, 30);
    const replayed = await Scene.open(scene.config);
    await replayed.fill(0, 30, CALM);
    await replayed.fill(0, 30, CALM, { mix: 'parcels' });
    await replayed.fill(15, 30, CALM, { mix: 'parcels', strand: 'depot=oldquay' });
    const rounds = await replayed.load();
    for (const batch of await batchesOf(scene)) await rounds.replay({ ...batch, families: [] });
    expect(await batchesOf(replayed)).not.toEqual(await batchesOf(scene));
  });

  it('a batch whose mixes have no window at its instant is passed over', async () => {
    const scene = await Scene.open(twoMixes());
    await scene.fill(0, 2, CALM);
    const rounds = await scene.load();
    const batch = { endMs: T0 + 9 * MINUTE, number: 0, mixes: ['outcomes'], families: [] };
    expect(await rounds.replay(batch)).toBeNull();
  });
});

describe('mixes of unequal cadence and own budgets', () => {
  const slow = { name: 'slow', window: { kind: 'sub-day', ms: 5 * MINUTE } } as const;
  const slowYardstick = { kind: 'rolling', lastMs: 100 * MINUTE } as const;

  it('sharing a budget, each test has its own level over all strands alive', async () => {
    const mixes = [mixOf(), mixOf({ ...slow, yardstick: slowYardstick })];
    const scene = await Scene.open(configOf(mixes));
    await scene.fill(0, 120, CALM);
    await scene.fill(0, 24, CALM, { mix: 'slow', lengthMs: 5 * MINUTE });
    await scene.judgeTo(120);
    const threshold = async (mix: string): Promise<number | null | undefined> =>
      (await scene.verdicts(mix)).at(-1)?.evidence?.threshold;
    // 0.75 b / T over two strands: T is 10,080 for one minute, 2,016 for five.
    expect(await threshold('outcomes')).toBeCloseTo(0.75 / 10_080 / 2, 15);
    expect(await threshold('slow')).toBeCloseTo(0.75 / 2_016 / 2, 15);
  });

  it('a mix with a budget of its own is a family of its own', async () => {
    const own = mixOf({ name: 'parcels', falseAlarms: { perWeek: 4 } });
    const scene = await Scene.open(configOf([mixOf(), own]));
    await scene.fill(0, 14, CALM);
    await scene.fill(0, 14, CALM, { mix: 'parcels' });
    await scene.judgeTo(14);
    const families = (await batchesOf(scene)).at(-1)?.families ?? [];
    expect(families.map(({ budget, expected }) => [budget, expected])).toEqual([
      ['', 1],
      ['parcels', 1],
    ]);
    expect(families.map(({ level }) => level)).toEqual([0.75 / 10_080, 3 / 10_080]);
  });

  it('a strand in alarm is no member of the family', async () => {
    const scene = await Scene.open(configOf([mixOf()]));
    await scene.fill(0, 40, CALM);
    await scene.fill(40, 43, SHIFTED);
    await scene.fill(0, 43, CALM, { strand: 'region=north' });
    await scene.judgeTo(43);
    const tested = (await batchesOf(scene)).map(({ families }) => families[0]?.tested);
    expect(tested.slice(38)).toEqual([2, 2, 2, 1, 1]);
    expect((await scene.verdicts()).at(-1)?.evidence?.threshold).toBeNull();
  });
});
