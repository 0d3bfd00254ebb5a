import { type BudgetShare, budgetShares } from '../alert/budget.js';
import { type Calendar, calendarOf } from '../clock/calendar.js';
import type { Config, MixConfig } from '../config/types.js';

const DAY_MS = 86_400_000;
/** Where the configuration does not say how long, a shift settles after as many windows. */
const FEWEST_WINDOWS = 24;

/** A mix with everything that follows from its configuration. */
export interface MixPlan {
  readonly mix: MixConfig;
  readonly calendar: Calendar;
  readonly share: BudgetShare;
  /** How long a shift must last to become the reference. */
  readonly settleMs: number;
}

export function planMixes(config: Pick<Config, 'mixes' | 'falseAlarms'>): MixPlan[] {
  const withCalendar = config.mixes.map((mix) => ({
    mix,
    calendar: calendarOf(mix.window, mix.zone),
  }));
  const shares = budgetShares(
    withCalendar.map(({ mix, calendar }) => ({
      name: mix.name,
      roundsPerWeek: calendar.perWeek,
      falseAlarms: mix.falseAlarms,
    })),
    config.falseAlarms,
  );
  return withCalendar.map(({ mix, calendar }) => ({
    mix,
    calendar,
    share: shareOf(mix.name, shares),
    settleMs: mix.settleMs ?? Math.max(DAY_MS, FEWEST_WINDOWS * calendar.nominalMs),
  }));
}

function shareOf(mix: string, shares: readonly BudgetShare[]): BudgetShare {
  const share = shares.find((s) => s.roundsPerWeek.has(mix));
  if (share === undefined) throw new RangeError(`mix ${mix} draws on no budget`);
  return share;
}
