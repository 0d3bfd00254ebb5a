import { requirePositive } from './preconditions.js';

/** Evidence up to here is ordinary and taken as it is: a run as rare as one in 20. */
const ORDINARY = Math.log(20);
/** Two runs of evidence 1 over the ordinary stand in for a strand that has shown none. */
const PRIOR_RUNS = 2;
/** Silences that carry more than this times the evidence they should come in spells. */
const SPELLS = 2;
/** Absence's part of the budget of false alarms. */
const BUDGET_SHARE = 0.05;

export interface Absence {
  /** What the run says, discounted by the strand's own history; <= the evidence given. */
  readonly adjusted: number;
  /** How many times longer than an independent hour's the tail of its silences is; >= 1. */
  readonly theta: number;
  /** theta > 2: the strand's silences come in spells, a finding by itself. */
  readonly inSpells: boolean;
}

/**
 * A run of empty windows against the runs that the strand's own past has seen.
 *
 * With u = log 20 and n of the baseline's completed runs above u:
 * theta = max(1, (sum (L_i - u) over those + 2)/(n + 2)); evidence L above u becomes
 * u + (L - u)/theta. It can only weaken the evidence. Raise at `absenceThreshold`; end with events.
 *
 * In: L >= 0 of the run and of every completed run of the baseline (`absenceEvidence`), which wants
 * at least 14 days. Out: see `Absence`. Refuses other input with RangeError.
 * Source: own; the mean excess over a threshold is Hill's (1975, from memory). Holidays stay weak:
 * 4 to 37 times the nominal level at 1e-5 with spells or quiet days, by the design's simulations.
 */
export function absence(input: {
  readonly evidence: number;
  readonly earlier: readonly number[];
}): Absence {
  const { evidence, earlier } = input;
  requireEvidence('evidence', evidence);
  earlier.forEach((value, index) => requireEvidence(`earlier[${index}]`, value));
  let [excess, runs] = [PRIOR_RUNS, PRIOR_RUNS];
  // In ascending order, so that the sum does not depend on the order of the runs.
  for (const value of [...earlier].sort((a, b) => a - b)) {
    if (value <= ORDINARY) continue;
    excess += value - ORDINARY;
    runs += 1;
  }
  const theta = Math.max(1, excess / runs);
  const adjusted = evidence > ORDINARY ? ORDINARY + (evidence - ORDINARY) / theta : evidence;
  return { adjusted, theta, inSpells: theta > SPELLS };
}

/**
 * The evidence at which an absence is raised: -log(.05 b/(m T)) for m strands that share a budget
 * of b false alarms a week, each with T windows a week. In: all > 0 and finite. Out: >= 0. Refuses
 * other input with RangeError.
 */
export function absenceThreshold(input: {
  readonly strands: number;
  readonly windowsPerWeek: number;
  readonly falseAlarmsPerWeek: number;
}): number {
  const { strands, windowsPerWeek, falseAlarmsPerWeek } = input;
  requirePositive('strands', strands);
  requirePositive('windowsPerWeek', windowsPerWeek);
  requirePositive('falseAlarmsPerWeek', falseAlarmsPerWeek);
  const level = (BUDGET_SHARE * falseAlarmsPerWeek) / (strands * windowsPerWeek);
  return Math.max(0, -Math.log(level));
}

function requireEvidence(name: string, value: number): void {
  if (!(value >= 0 && value < Infinity)) {
    throw new RangeError(`${name}: must be a finite number >= 0, got ${value}`);
  }
}
