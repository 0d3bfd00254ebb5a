import type { Method } from './methods.js';

/** Below this a logarithm of p has no 53 bits left to compare. */
const LEAST_TRUTH = 1e-290;

/**
 * |value - truth| / |truth|; 0 where both are the same, also both -Infinity, and Infinity where
 * either is no number. A log of p close to 0, p close to 1, is measured as strictly as any other.
 */
export function relativeError(value: number, truth: number): number {
  if (value === truth) return 0;
  const error = Math.abs(value - truth) / Math.max(LEAST_TRUTH, Math.abs(truth));
  return Number.isNaN(error) ? Infinity : error;
}

/** An argument, what is compared there, and by how much it is off. */
export interface Miss {
  readonly at: number;
  readonly row: readonly number[];
  readonly ours: number;
  readonly theirs: number;
  readonly error: number;
}

/** What comparing one method with one oracle gave. */
export interface Measured {
  readonly method: Method;
  /** Arguments at which the oracle has a value. */
  readonly compared: number;
  /** The least value of the oracle: how deep the tails go. */
  readonly deepest: number;
  readonly worst: Miss | undefined;
  /** The worst that keeps the goal. */
  readonly worstWithin: Miss | undefined;
  /** Those beyond the goal, in the order of the arguments. */
  readonly beyond: readonly Miss[];
}

/**
 * Compares a method with an oracle's values, one a row; a NaN of the oracle means that it was not
 * asked there. What ours refuses counts as an infinite error.
 */
export function measure(
  method: Method,
  rows: readonly (readonly number[])[],
  values: readonly (readonly number[])[],
): Measured {
  const misses = values
    .map((value, at) => missAt(method, at, rows[at], value[method.column]))
    .filter((miss) => !Number.isNaN(miss.theirs));
  const keeps = (miss: Miss): boolean => miss.error <= method.goal;
  const finite = misses.map((miss) => miss.theirs).filter(Number.isFinite);
  return {
    method,
    compared: misses.length,
    deepest: finite.reduce((least, value) => Math.min(least, value), Infinity),
    worst: misses.reduce<Miss | undefined>(worse, undefined),
    worstWithin: misses.filter(keeps).reduce<Miss | undefined>(worse, undefined),
    beyond: misses.filter((miss) => !keeps(miss)),
  };
}

const worse = (worst: Miss | undefined, miss: Miss): Miss =>
  worst === undefined || miss.error > worst.error ? miss : worst;

function missAt(method: Method, at: number, row: readonly number[], theirs: number): Miss {
  const ours = valueOrNaN(method, row);
  return { at, row, ours, theirs, error: relativeError(ours, theirs) };
}

function valueOrNaN(method: Method, row: readonly number[]): number {
  try {
    return method.ours(row);
  } catch (error) {
    if (error instanceof RangeError) return NaN;
    throw error;
  }
}
