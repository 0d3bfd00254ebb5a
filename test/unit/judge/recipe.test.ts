import { describe, expect, it } from 'vitest';

import { calendarOf } from '../../../src/clock/calendar.js';
import { reachMs, recipeFor } from '../../../src/judge/recipe.js';
import type { UsablePast } from '../../../src/terms/recipe.js';
import { mixOf } from '../schedule/scene.js';
import { MINUTE, T0 } from './samples.js';

const calendar = calendarOf({ kind: 'sub-day', ms: MINUTE }, 'UTC');
const fresh: UsablePast = { epochMs: T0 - 1e10, excluded: [] };
const at = (minute: number) => calendar.windowAt(T0 + minute * MINUTE);

describe('the recipe of a rolling baseline', () => {
  const mix = mixOf();

  it('moves every fourteenth of its length, at instants that do not depend on the strand', () => {
    const recipes = [0, 1, 2, 3, 4].map((n) => recipeFor(mix, calendar, at(n), fresh, null));
    // An hour over 14 is 4.3 windows: steps of four, aligned to the epoch.
    expect(new Set(recipes.slice(0, 4).map(({ step }) => step)).size).toBe(1);
    expect(recipes[4]?.step).toBe((recipes[3]?.step ?? 0) + 4);
  });

  it('moves with every window while it is young, then every two, then in full steps', () => {
    const young: UsablePast = { epochMs: T0, excluded: [] };
    const starts = (from: number, to: number): number => {
      const steps = new Set<number>();
      for (let n = from; n < to; n++) {
        steps.add(recipeFor(mix, calendar, at(n), young, null).step);
      }
      return steps.size;
    };
    expect(starts(0, 28)).toBe(28);
    expect(starts(28, 56)).toBe(14);
    expect(starts(56, 84)).toBe(7);
  });

  it('stands still while its step lasts', () => {
    const first = recipeFor(mix, calendar, at(0), fresh, null);
    expect(recipeFor(mix, calendar, at(3), fresh, first)).toBe(first);
    const next = recipeFor(mix, calendar, at(4), fresh, first);
    expect(next).toMatchObject({ fromMs: T0 - 56 * MINUTE, toMs: T0 + 4 * MINUTE });
  });

  it('never reaches before the beginning of the present mix', () => {
    const young = { epochMs: T0 - 5 * MINUTE, excluded: [] };
    expect(recipeFor(mix, calendar, at(0), young, null).fromMs).toBe(T0 - 5 * MINUTE);
  });

  it('reaches past its own alarms, twice its length at most', () => {
    const span = (from: number, to: number) => ({
      fromMs: T0 + from * MINUTE,
      toMs: T0 + to * MINUTE,
    });
    const once = { ...fresh, excluded: [span(-20, -10)] };
    const recipe = recipeFor(mix, calendar, at(0), once, null);
    expect(recipe.fromMs).toBe(T0 - 70 * MINUTE);
    expect(recipe.excluded).toEqual(once.excluded);
    const long = { ...fresh, excluded: [span(-110, -10)] };
    expect(recipeFor(mix, calendar, at(0), long, null).fromMs).toBe(T0 - 120 * MINUTE);
    expect(reachMs(mix, calendar)).toBeGreaterThanOrEqual(120 * MINUTE);
  });

  it('names only the alarms that it reaches', () => {
    const past = { fromMs: T0 - 900 * MINUTE, toMs: T0 - 800 * MINUTE };
    const recipe = recipeFor(mix, calendar, at(0), { ...fresh, excluded: [past] }, null);
    expect(recipe.excluded).toEqual([]);
    expect(recipe.fromMs).toBe(T0 - 60 * MINUTE);
  });
});

describe('the recipe of a pinned baseline', () => {
  const yardstick = { kind: 'pinned', fromMs: T0, toMs: T0 + 20 * MINUTE } as const;

  it('is its span, whatever the strand has been through', () => {
    const late: UsablePast = {
      epochMs: T0 + 500 * MINUTE,
      excluded: [{ fromMs: T0 + 19 * MINUTE, toMs: T0 + 25 * MINUTE }],
    };
    const recipe = recipeFor(mixOf({ yardstick }), calendar, at(600), late, null);
    expect(recipe).toEqual({ step: 0, fromMs: T0, toMs: T0 + 20 * MINUTE, excluded: [] });
  });

  it('follows the configuration when another span is pinned', () => {
    const before = recipeFor(mixOf({ yardstick }), calendar, at(600), fresh, null);
    const changed = mixOf({ yardstick: { ...yardstick, toMs: T0 + 40 * MINUTE } });
    expect(recipeFor(changed, calendar, at(601), fresh, before).toMs).toBe(T0 + 40 * MINUTE);
  });
});

describe('the recipe of neighbours and seasons', () => {
  it('previous, declared and files look anew at every window', () => {
    const previous = mixOf({ yardstick: { kind: 'previous', windows: 2 } });
    const first = recipeFor(previous, calendar, at(0), fresh, null);
    const second = recipeFor(previous, calendar, at(1), fresh, first);
    expect(second.toMs).toBe(T0 + MINUTE);
    // Twice the 96 pairs, and two windows more for the sum of two.
    expect(second.toMs - second.fromMs).toBe(2 * (96 + 2) * MINUTE);
  });

  it('a season reaches a cycle further than it keeps', () => {
    const season = mixOf({ yardstick: { kind: 'season', cycle: 'day', keep: 4, except: [] } });
    const recipe = recipeFor(season, calendar, at(0), fresh, null);
    expect(recipe.toMs - recipe.fromMs).toBeGreaterThanOrEqual(5 * 1440 * MINUTE);
  });
});
