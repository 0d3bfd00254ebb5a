import type { Calendar } from '../clock/calendar.js';
import type { MixConfig } from '../config/types.js';
import type { Window } from '../terms/window.js';
import { merge } from './counts.js';
import type { WindowCounts } from './reference.js';

/** Cycles from which a slot has a reference of its own. */
export const FEWEST_CYCLES = 2;

/** Windows by slot of the cycle, in time order, the newest `keep` of each. */
type Slots = ReadonlyMap<string, readonly WindowCounts[]>;

interface Gathered {
  readonly mix: MixConfig;
  readonly calendar: Calendar;
  readonly slots: Slots;
}

/** Every window of a step asks for the slots of the same past. */
const known = new WeakMap<readonly WindowCounts[], Gathered>();

/** The slot of a season that a window falls into. */
export function slotAt(mix: MixConfig, calendar: Calendar, window: Window): string {
  const weekStarts = mix.window.kind === 'week' ? mix.window.weekStarts : 'monday';
  return calendar.slot(window.startMs, seasonOf(mix).cycle, weekStarts);
}

/** Past windows by slot. Days that the configuration excepts have no part in it. */
export function slotsOf(mix: MixConfig, calendar: Calendar, past: readonly WindowCounts[]): Slots {
  const found = known.get(past);
  if (found?.mix === mix && found.calendar === calendar) return found.slots;
  const slots = gather(mix, calendar, past);
  known.set(past, { mix, calendar, slots });
  return slots;
}

/** Whether the mix is a season in which the window's slot has no reference yet. */
export function lacksCycles(
  mix: MixConfig,
  calendar: Calendar,
  window: Window,
  past: readonly WindowCounts[],
): boolean {
  if (mix.yardstick.kind !== 'season') return false;
  const own = slotsOf(mix, calendar, past).get(slotAt(mix, calendar, window));
  return (own?.length ?? 0) < FEWEST_CYCLES;
}

function gather(mix: MixConfig, calendar: Calendar, past: readonly WindowCounts[]): Slots {
  const { keep, except: dates } = seasonOf(mix);
  const except = new Set(dates);
  const slots = new Map<string, WindowCounts[]>();
  for (const w of past) {
    const date = calendar.localDate(w.window.startMs);
    if (except.has(date)) continue;
    const name = slotAt(mix, calendar, w.window);
    const slot = slots.get(name) ?? [];
    slots.set(name, slot);
    const last = slot.at(-1);
    // A repeated local hour is one slot: its windows are pooled.
    if (last !== undefined && calendar.localDate(last.window.startMs) === date) {
      slot[slot.length - 1] = pool(last, w);
    } else slot.push(w);
  }
  return new Map([...slots].map(([name, slot]) => [name, slot.slice(-keep)]));
}

function pool(a: WindowCounts, b: WindowCounts): WindowCounts {
  return {
    window: { startMs: a.window.startMs, endMs: b.window.endMs },
    counts: merge([a, b]),
  };
}

function seasonOf({
  name,
  yardstick,
}: MixConfig): Extract<MixConfig['yardstick'], { kind: 'season' }> {
  if (yardstick.kind !== 'season') throw new RangeError(`mix ${name} has no season`);
  return yardstick;
}
