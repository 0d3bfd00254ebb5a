import { requireFraction, requireInteger, requireOpenFraction } from './preconditions.js';
import { requireLogPs } from './requireLogPs.js';

/** Scales the sequence of `gamma` to sum 1 (Javanmard & Montanari 2018, from memory). */
const GAMMA_SCALE = 0.07720838;
const MAX_TESTS = 1_000_000_000;
/** Every level looks back on all discoveries, so that an epoch must end before there are more. */
const MAX_DISCOVERIES = 10_000;

/** All that must be kept between two tests. */
export interface LordState {
  /** Tests done in this epoch. */
  readonly tests: number;
  /** Which of them, counted from 1, were discoveries: ascending. */
  readonly discoveries: readonly number[];
}

export interface LordOptions {
  /** The false discovery rate held, strictly between 0 and 1. */
  readonly level: number;
  /** Wealth to start with, in [0, level]; a tenth of the level when left out. */
  readonly wealth?: number;
}

export interface LordStep {
  readonly state: LordState;
  /** Natural log of the level this test was held to. */
  readonly logThreshold: number;
  readonly isDiscovery: boolean;
}

/** The state before the first test of an epoch. */
export function lordStart(): LordState {
  return { tests: 0, discoveries: [] };
}

/**
 * One step of LORD++: false discovery rate control for tests that come one after another.
 *
 * With gamma_j = .07720838 log(max(j, 2)) / (j exp(sqrt(log j))) and discoveries at tests
 * tau_1 < tau_2 < ..., test t is a discovery when p_t is at most
 * alpha_t = w0 gamma_t + (level - w0) gamma_(t - tau_1) + level sum_(j >= 2) gamma_(t - tau_j).
 * The expected share of false among the discoveries is at most `level` for independent tests.
 * The order of tests must not depend on their p-values, and what has been discovered must not be
 * tested again, or it earns level for nothing.
 * In: the state after the test before (see `lordStart`); natural log of p (<= 0, -Infinity
 * allowed). Out: the state to keep, the threshold, and the decision. Old states stay as they were.
 * Refuses other input, and an epoch of over 10,000 discoveries, with RangeError.
 * Source: Ramdas, Yang, Wainwright & Jordan (2017); Javanmard & Montanari (2018), from memory.
 * Cost: linear in the discoveries of the epoch.
 */
export function lordPlusPlus(
  state: LordState,
  input: LordOptions & { readonly logP: number },
): LordStep {
  requireLogPs([input.logP]);
  const logThreshold = Math.log(lordLevel(state, input));
  const isDiscovery = input.logP <= logThreshold;
  const tests = state.tests + 1;
  const discoveries = isDiscovery ? [...state.discoveries, tests] : state.discoveries;
  return { state: { tests, discoveries }, logThreshold, isDiscovery };
}

/** The level that the next test will be held to: alpha_t of `lordPlusPlus`, in (0, level]. */
export function lordLevel(state: LordState, options: LordOptions): number {
  const { level } = options;
  const wealth = options.wealth ?? level / 10;
  requireOpenFraction('level', level);
  requireFraction('wealth', wealth);
  if (wealth > level) {
    throw new RangeError(`wealth: must be at most the level ${level}, got ${wealth}`);
  }
  requireState(state);
  const test = state.tests + 1;
  let earned = wealth * gamma(test);
  state.discoveries.forEach((at, j) => {
    earned += (j === 0 ? level - wealth : level) * gamma(test - at);
  });
  return earned;
}

function gamma(j: number): number {
  return (GAMMA_SCALE * Math.log(Math.max(j, 2))) / (j * Math.exp(Math.sqrt(Math.log(j))));
}

function requireState({ tests, discoveries }: LordState): void {
  requireInteger('tests', tests, 0, MAX_TESTS);
  if (discoveries.length > MAX_DISCOVERIES) {
    throw new RangeError(
      `discoveries: an epoch holds at most ${MAX_DISCOVERIES}, got ${discoveries.length}; ` +
        'start a new one',
    );
  }
  let before = 0;
  discoveries.forEach((at, j) => {
    requireInteger(`discoveries[${j}]`, at, before + 1, tests);
    before = at;
  });
}
