import { benjaminiHochberg } from '../stats/benjaminiHochberg.js';
import type { FamilyNote } from '../terms/round.js';
import { type BudgetShare, familyLevel } from './budget.js';

/** One test of a family: which mix's strand, and the natural log of its p-value. */
export interface FamilyTest {
  readonly mix: string;
  readonly logP: number;
}

export interface FamilyDecision {
  readonly passes: boolean;
  /** Natural log of the threshold that p had to reach. */
  readonly logThreshold: number;
}

export interface FamilyOutcome {
  /** In the order of the tests given. */
  readonly decisions: readonly FamilyDecision[];
  readonly note: FamilyNote;
}

/** How many strands a decision must allow for. */
export interface FamilySize {
  /** Strands of this instant that were judged in earlier batches or are still to come. */
  readonly elsewhere: number;
  /** Strands alive under the budget, of any cadence. */
  readonly active: number;
}

/**
 * Which windows of a batch pass, so that a week of rounds costs no more false alarms than the
 * budget allows. Equal cadence: Benjamini and Hochberg (1995) at the level of one round, which for
 * quiet weeks bounds the expected number of false alarms; a batch that is not the whole round gets
 * its part of the level. Unequal cadence: every test at its own level over the strands alive
 * (weighted Bonferroni). Memoryless, so that a restart cannot change it.
 */
export function decideFamily(
  share: BudgetShare,
  tests: readonly FamilyTest[],
  size: FamilySize,
): FamilyOutcome {
  return share.equalCadence
    ? oneFamily(share, tests, size.elsewhere)
    : oneByOne(share, tests, Math.max(size.active, tests.length));
}

function oneFamily(
  share: BudgetShare,
  tests: readonly FamilyTest[],
  elsewhere: number,
): FamilyOutcome {
  const [roundsPerWeek = 1] = share.roundsPerWeek.values();
  const expected = tests.length + elsewhere;
  const whole = familyLevel(share.perWeek, roundsPerWeek);
  const level = expected === 0 ? whole : (whole * tests.length) / expected;
  const rejected = benjaminiHochberg(
    tests.map((test) => test.logP),
    level,
  );
  const found = rejected.filter(Boolean).length;
  const decisions = rejected.map((passes) => ({
    passes,
    logThreshold: Math.log((level * (passes ? found : found + 1)) / tests.length),
  }));
  const note = { budget: share.budget, expected, tested: tests.length, level, spent: level };
  return { decisions, note: tests.length === 0 ? { ...note, spent: 0 } : note };
}

function oneByOne(share: BudgetShare, tests: readonly FamilyTest[], active: number): FamilyOutcome {
  const thresholds = tests.map(
    ({ mix }) => familyLevel(share.perWeek, share.roundsPerWeek.get(mix) ?? 1) / active,
  );
  const decisions = tests.map(({ logP }, at) => {
    const logThreshold = Math.log(thresholds[at] ?? 0);
    return { passes: logP <= logThreshold, logThreshold };
  });
  const spent = thresholds.reduce((a, b) => a + b, 0);
  const level = Math.max(0, ...thresholds) * active;
  return {
    decisions,
    note: { budget: share.budget, expected: active, tested: tests.length, level, spent },
  };
}
