import type { Calendar } from '../clock/calendar.js';
import type { MixConfig } from '../config/types.js';
import type { Recipe, Span, UsablePast } from '../terms/recipe.js';
import type { Window } from '../terms/window.js';
import { PAIRS } from './reference.js';

/** A rolling baseline reaches back at most this many of its lengths past alarms. */
const MOST_LENGTHS = 2;

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
  const { yardstick } = mix;
  if (yardstick.kind === 'pinned') {
    // Pinned is pinned: no alarm and no new beginning takes anything out of the span.
    return { step: 0, fromMs: yardstick.fromMs, toMs: yardstick.toMs, excluded: [] };
  }
  const step = stepOf(mix, calendar, window, past);
  if (current?.step === step) return current;
  const span = spanOf(mix, calendar, window, past);
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
      return MOST_LENGTHS * yardstick.lastMs + stepMs(mix, calendar);
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

function spanOf(mix: MixConfig, calendar: Calendar, window: Window, past: UsablePast): Span {
  const { yardstick } = mix;
  const toMs = window.startMs;
  switch (yardstick.kind) {
    case 'pinned':
      return { fromMs: yardstick.fromMs, toMs: yardstick.toMs };
    case 'rolling':
      return { fromMs: toMs - rollingLength(yardstick.lastMs, toMs, past), toMs };
    default:
      return { fromMs: toMs - reachMs(mix, calendar), toMs };
  }
}

/** Time in alarm does not count, or a strand would know too little just after an incident. */
function rollingLength(lastMs: number, toMs: number, past: UsablePast): number {
  const farthestMs = toMs - MOST_LENGTHS * lastMs;
  const inAlarmMs = past.excluded.reduce((sum, span) => {
    const overlap = Math.min(span.toMs, toMs) - Math.max(span.fromMs, farthestMs);
    return sum + Math.max(0, overlap);
  }, 0);
  return Math.min(MOST_LENGTHS * lastMs, lastMs + inAlarmMs);
}

/** Ordinal of the window at which the step began. */
function stepOf(mix: MixConfig, calendar: Calendar, window: Window, past: UsablePast): number {
  const full = Math.max(1, Math.round(stepMs(mix, calendar) / calendar.nominalMs));
  const windows = mix.yardstick.kind === 'rolling' ? youngStep(full, calendar, window, past) : full;
  return Math.floor(calendar.ordinal(window.startMs) / windows) * windows;
}

/**
 * While a baseline is young its length is its age, and it moves in smaller steps (of 1, 2, 4 ...
 * windows), so that a new strand is judged as soon as it has windows enough.
 */
function youngStep(full: number, calendar: Calendar, window: Window, past: UsablePast): number {
  const age = (window.startMs - past.epochMs) / calendar.nominalMs;
  const part = Math.max(1, age / STEPS_PER_LENGTH);
  return part >= full ? full : 2 ** Math.floor(Math.log2(part));
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
export function neighbourReach(calendar: Calendar, n: number): number {
  return 2 * (PAIRS + n) * calendar.nominalMs;
}
