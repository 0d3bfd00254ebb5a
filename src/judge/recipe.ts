import type { Calendar } from '../clock/calendar.js';
import type { MixConfig } from '../config/types.js';
import type { Recipe, Span, UsablePast } from '../terms/recipe.js';
import type { Window } from '../terms/window.js';
import { PAIRS } from './reference.js';

/** A rolling baseline moves this many times on its length. */
const STEPS_PER_LENGTH = 14;

const CYCLE_MS = { day: 86_400_000, week: 604_800_000 } as const;

/**
 * The recipe for a window. `current` is kept while its step lasts, so that a reference stands
 * still between steps.
 */
export function recipeFor(
  mix: MixConfig,
  calendar: Calendar,
  window: Window,
  past: UsablePast,
  current: Recipe | null,
): Recipe {
  const step = stepOf(mix, calendar, window);
  if (current?.step === step) return current;
  const span = spanOf(mix, calendar, window);
  return {
    step,
    fromMs: Math.max(span.fromMs, past.epochMs),
    toMs: span.toMs,
    excluded: past.excluded.filter((e) => e.toMs > span.fromMs && e.fromMs < span.toMs),
  };
}

/** How far back any recipe of the mix can reach from a window's start, in ms. */
export function reachMs(mix: MixConfig, calendar: Calendar): number {
  const { yardstick } = mix;
  switch (yardstick.kind) {
    case 'rolling':
      return yardstick.lastMs + stepMs(mix, calendar);
    case 'season':
      return (yardstick.keep + 1) * CYCLE_MS[yardstick.cycle] + stepMs(mix, calendar);
    case 'pinned':
      return 0;
    case 'declared':
    case 'file':
      return neighbourReach(calendar, 1);
    case 'previous':
      return neighbourReach(calendar, yardstick.windows);
  }
}

function spanOf(mix: MixConfig, calendar: Calendar, window: Window): Span {
  const { yardstick } = mix;
  if (yardstick.kind === 'pinned') return { fromMs: yardstick.fromMs, toMs: yardstick.toMs };
  const length = yardstick.kind === 'rolling' ? yardstick.lastMs : reachMs(mix, calendar);
  return { fromMs: window.startMs - length, toMs: window.startMs };
}

function stepOf(mix: MixConfig, calendar: Calendar, window: Window): number {
  if (mix.yardstick.kind === 'pinned') return 0;
  const windows = Math.max(1, Math.round(stepMs(mix, calendar) / calendar.nominalMs));
  return Math.floor(calendar.ordinal(window.startMs) / windows);
}

function stepMs(mix: MixConfig, calendar: Calendar): number {
  const { yardstick } = mix;
  switch (yardstick.kind) {
    case 'rolling':
      return Math.max(calendar.nominalMs, yardstick.lastMs / STEPS_PER_LENGTH);
    case 'season': {
      const length = yardstick.keep * CYCLE_MS[yardstick.cycle];
      return Math.max(calendar.nominalMs, length / STEPS_PER_LENGTH);
    }
    default:
      return calendar.nominalMs;
  }
}

/** Twice the windows that are wanted, so that gaps and thin windows leave enough pairs. */
function neighbourReach(calendar: Calendar, n: number): number {
  return 2 * (PAIRS + n) * calendar.nominalMs;
}
