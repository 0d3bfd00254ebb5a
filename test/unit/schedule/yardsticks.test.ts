import { describe, expect, it } from 'vitest';

import type { YardstickConfig } from '../../../src/config/types.js';
import { CALM, configOf, lifeOf, MINUTE, mixOf, Scene, SHIFTED, T0 } from './scene.js';

const HOUR = 60 * MINUTE;

async function sceneOf(yardstick: YardstickConfig): Promise<Scene> {
  return Scene.open(configOf([mixOf({ yardstick })]));
}

describe('each yardstick over rounds', () => {
  it('previous: freezes the window before the raise, and ends against it', async () => {
    const scene = await sceneOf({ kind: 'previous', windows: 1 });
    await scene.fill(0, 40, CALM);
    await scene.fill(40, 45, SHIFTED);
    await scene.fill(45, 50, CALM);
    await scene.judgeTo(50);
    // Three bins need 15 pairs, 16 windows: 2 x 2 x 15^2 / 44 = 20.45 degrees of freedom.
    expect(await scene.story()).toBe('learning 0-15, steady 16-39, shifted 40-46, steady 47-49');
    const frozen = (await scene.verdicts())[44]?.evidence?.reference;
    expect(frozen).toMatchObject({ yardstick: 'previous', windows: 1, fromMs: T0 + 39 * MINUTE });
  });

  it('declared: judges once it knows how much the mix varies, against fixed shares', async () => {
    const shares = [
      { category: 'ok', share: 0.9 },
      { category: 'bad', share: 0.1 },
    ];
    const scene = await sceneOf({ kind: 'declared', shares, halfUnit: 0.005 });
    await scene.fill(0, 40, { ok: 900, bad: 100 });
    await scene.fill(40, 42, { ok: 700, bad: 100, new: 200 });
    await scene.fill(42, 46, { ok: 900, bad: 100 });
    await scene.judgeTo(46);
    // (rest) expects 1000 x .005/1.005 = 4.98 events, under 5, so it joins the smaller bin: two
    // bins need 30 pairs, 31 windows.
    expect(await scene.story()).toMatch(/^learning 0-30, steady 31-39, shifted 40-/);
    const evidence = (await scene.verdicts())[40]?.evidence;
    expect(evidence?.reference).toMatchObject({ yardstick: 'declared', events: null });
    expect(evidence?.weightReference).toBeNull();
    // What no share was declared for is told as (rest), with its real share of the events.
    const pooled = evidence?.movers.find(({ category }) => category === '(pooled)');
    expect(pooled?.members?.[0]).toMatchObject({ category: '(rest)', after: 0.2 });
  });

  it('a counts file with windows judges from the first window on', async () => {
    const windows = Array.from({ length: 12 }, () => new Map(Object.entries(CALM)));
    const scene = await sceneOf({ kind: 'file', path: 'c.csv', windows, windowed: true });
    await scene.fill(0, 2, CALM);
    await scene.put(2, SHIFTED);
    await scene.judgeTo(3);
    expect(await scene.story()).toBe('steady 0-1, shifted 2');
    const note = (await scene.verdicts())[0]?.evidence?.reference;
    expect(note).toMatchObject({ windows: 12, events: 12_000, fromMs: null, toMs: null });
  });

  it('a counts file without windows learns its dispersion from the strand', async () => {
    const windows = [new Map(Object.entries({ ok: 90_000, bad: 8_000, odd: 2_000 }))];
    const scene = await sceneOf({ kind: 'file', path: 'c.csv', windows, windowed: false });
    await scene.fill(0, 20, CALM);
    await scene.put(20, SHIFTED);
    await scene.judgeTo(21);
    expect(await scene.story()).toBe('learning 0-15, steady 16-19, shifted 20');
    const evidence = (await scene.verdicts())[20]?.evidence;
    expect(evidence?.reference).toMatchObject({ windows: null, events: 100_000 });
  });

  it('pinned: keeps to its span, whatever alarms come after', async () => {
    const scene = await sceneOf({ kind: 'pinned', fromMs: T0, toMs: T0 + 20 * MINUTE });
    await scene.fill(0, 20, CALM);
    await scene.fill(20, 22, SHIFTED);
    await scene.fill(22, 30, CALM);
    await scene.judgeTo(30);
    expect((await scene.alerts()).map(lifeOf)).toEqual(['raised 20, returned 24']);
    const note = (await scene.verdicts()).at(-1)?.evidence?.reference;
    expect(note).toMatchObject({ windows: 20, fromMs: T0, toMs: T0 + 20 * MINUTE });
    const [state] = await scene.store.strandStates();
    expect(state?.state.excluded).toHaveLength(1);
  });
});

describe('a daily season of hourly windows', () => {
  const season = { kind: 'season', cycle: 'day', keep: 4, except: [] } as const;
  const hourly = { window: { kind: 'sub-day', ms: HOUR }, yardstick: season } as const;
  /** By day the mix is another than by night. */
  const usual = (hour: number): Record<string, number> =>
    hour % 24 < 12 ? { ok: 900, bad: 80, odd: 20 } : { ok: 700, bad: 200, odd: 100 };

  async function seasonScene(hours: number): Promise<Scene> {
    const limits = { ...mixOf().limits, forgetMs: 48 * HOUR };
    const scene = await Scene.open(configOf([mixOf({ ...hourly, limits, settleMs: null })]));
    for (let hour = 0; hour < hours; hour++) {
      await scene.put(hour, usual(hour), { lengthMs: HOUR });
    }
    return scene;
  }

  it('with two earlier days a slot is held against them; its pattern is no shift', async () => {
    const scene = await seasonScene(84);
    await scene.judgeTo(84 * 60);
    const evidence = (await scene.verdicts()).at(-1)?.evidence;
    expect(evidence?.reference).toMatchObject({ yardstick: 'season', provisional: null });
    expect(evidence?.moved.estimate).toBe(0);
  });

  it('before that it is held against the window just before, provisionally', async () => {
    const scene = await seasonScene(20);
    await scene.judgeTo(20 * 60);
    const evidence = (await scene.verdicts()).at(-1)?.evidence;
    expect(evidence?.reference.provisional).toMatch(/^fewer than two earlier cycles/);
    expect(evidence?.reference).toMatchObject({
      yardstick: 'season',
      windows: 1,
      fromMs: T0 + 18 * HOUR,
    });
  });

  it('a shift began where it left its own slots, not where day and night meet', async () => {
    const scene = await seasonScene(98);
    for (const hour of [98, 99]) {
      await scene.put(hour, { ok: 500, bad: 400, odd: 100 }, { lengthMs: HOUR });
    }
    await scene.judgeTo(100 * 60);
    const last = (await scene.alerts()).at(-1);
    expect(last).toMatchObject({ provisional: false, raisedAtMs: T0 + 99 * HOUR });
    expect(last?.since).toEqual({
      estimateMs: T0 + 98 * HOUR,
      earliestMs: T0 + 98 * HOUR,
      latestMs: T0 + 98 * HOUR,
    });
  });

  it('a lasting shift does not move again where day and night meet', async () => {
    const scene = await seasonScene(96);
    for (let hour = 96; hour < 120; hour++) {
      const by = hour % 24 < 12 ? { ok: 700, bad: 280, odd: 20 } : { ok: 500, bad: 400, odd: 100 };
      await scene.put(hour, by, { lengthMs: HOUR });
    }
    // Eleven windows since the raise at 96 make a reference by 108, where the night begins.
    await scene.judgeTo(120 * 60);
    const last = (await scene.alerts()).at(-1);
    expect(last).toMatchObject({ raisedAtMs: T0 + 97 * HOUR, ended: null });
  });

  it('a shift against the window before began in this one', async () => {
    const scene = await seasonScene(13);
    await scene.fill(13, 20, usual(13), { lengthMs: HOUR });
    await scene.put(20, { ok: 500, bad: 400, odd: 100 }, { lengthMs: HOUR });
    await scene.judgeTo(21 * 60);
    const [alert] = await scene.alerts();
    expect(alert?.since).toMatchObject({ estimateMs: T0 + 20 * HOUR, earliestMs: T0 + 20 * HOUR });
  });

  it('an alert raised provisionally is marked so, and waits for a digest', async () => {
    const limits = { ...mixOf().limits, forgetMs: 48 * HOUR };
    const mix = mixOf({ ...hourly, limits, settleMs: null });
    const oncall = { name: 'oncall', webhook: '', secret: null, freshMs: 1e12, digestMs: HOUR };
    const scene = await Scene.open(configOf([mix], { send: [oncall] }));
    await scene.fill(0, 20, CALM, { lengthMs: HOUR });
    await scene.fill(20, 21, SHIFTED, { lengthMs: HOUR });
    await scene.judgeTo(21 * 60);
    expect((await scene.alerts()).map(({ provisional }) => provisional)).toEqual([true]);
    expect((await scene.store.digestEntries('oncall')).map(({ event }) => event)).toEqual([
      'raised',
    ]);
  });
});
