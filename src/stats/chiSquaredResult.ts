import type { ChiSquaredResult } from '../terms/evidence.js';
import { chiSquaredLogSf } from './chiSquaredLogSf.js';

/** A statistic with its p-value; without degrees of freedom there is nothing to test: p = 1. */
export function chiSquaredResult(statistic: number, df: number): ChiSquaredResult {
  if (df === 0 && statistic < Infinity) return { statistic: 0, df, p: 1, logP: 0 };
  const logP = statistic === Infinity ? -Infinity : chiSquaredLogSf(statistic, df);
  return { statistic, df, p: Math.exp(logP), logP };
}
