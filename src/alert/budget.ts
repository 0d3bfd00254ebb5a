import type { Budget } from '../config/types.js';

/** Share of the budget that judging windows may spend; creep and absence have the rest. */
const WINDOW_SHARE = 0.75;

/** The level of a round never exceeds this, however generous the budget. */
const CEILING = 0.001;

/** Mixes that draw on one budget of false alarms. */
export interface BudgetShare {
  /** The mix whose own budget it is; `''` for the shared one. */
  readonly budget: string;
  readonly perWeek: number;
  /** Judged windows a week, by mix. */
  readonly roundsPerWeek: ReadonlyMap<string, number>;
  /** All its mixes are judged at the same cadence, hence as one family of tests. */
  readonly equalCadence: boolean;
}

/** Gathers mixes by the budget they draw on, in the order of the configuration. */
export function budgetShares(
  mixes: readonly {
    readonly name: string;
    readonly roundsPerWeek: number;
    readonly falseAlarms: Budget | null;
  }[],
  shared: Budget,
): BudgetShare[] {
  const own = mixes.filter((mix) => mix.falseAlarms !== null);
  const others = mixes.filter((mix) => mix.falseAlarms === null);
  const shares = own.map((mix) =>
    share(mix.name, mix.falseAlarms?.perWeek ?? shared.perWeek, [mix]),
  );
  return others.length === 0 ? shares : [share('', shared.perWeek, others), ...shares];
}

/**
 * Level at which a family of tests of this cadence is judged: min(0.75 b / T, 0.001), b being the
 * accepted false alarms and T the rounds of a week.
 */
export function familyLevel(perWeek: number, roundsPerWeek: number): number {
  return Math.min((WINDOW_SHARE * perWeek) / roundsPerWeek, CEILING);
}

/** False alarms a week to be expected at the levels in use when nothing ever shifts. */
export function expectedFalseAlarms(shares: readonly BudgetShare[]): number {
  return shares.reduce((sum, s) => sum + expectedOf(s), 0);
}

function expectedOf(s: BudgetShare): number {
  const rates = [...s.roundsPerWeek.values()].map((t) => t * familyLevel(s.perWeek, t));
  // Families of unequal cadence split the budget over their strands: a mean, not a sum.
  return rates.reduce((a, b) => a + b, 0) / Math.max(1, rates.length);
}

function share(
  budget: string,
  perWeek: number,
  mixes: readonly { readonly name: string; readonly roundsPerWeek: number }[],
): BudgetShare {
  const roundsPerWeek = new Map(mixes.map((mix) => [mix.name, mix.roundsPerWeek]));
  return {
    budget,
    perWeek,
    roundsPerWeek,
    equalCadence: new Set(roundsPerWeek.values()).size === 1,
  };
}
