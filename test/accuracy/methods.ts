import { betaBinomialLogCdf } from '../../src/stats/betaBinomialLogCdf.js';
import { betaBinomialLogSf } from '../../src/stats/betaBinomialLogSf.js';
import { chiSquaredLogCdf } from '../../src/stats/chiSquaredLogCdf.js';
import { chiSquaredLogSf } from '../../src/stats/chiSquaredLogSf.js';
import { fLogSf } from '../../src/stats/fLogSf.js';
import { hypergeometricLogCdf } from '../../src/stats/hypergeometricLogCdf.js';
import { hypergeometricLogSf } from '../../src/stats/hypergeometricLogSf.js';
import { likelihoodRatio } from '../../src/stats/likelihoodRatio.js';
import { noncentralChiSquaredLogCdf } from '../../src/stats/noncentralChiSquaredLogCdf.js';
import { noncentralChiSquaredLogSf } from '../../src/stats/noncentralChiSquaredLogSf.js';
import { noncentralFLogCdf } from '../../src/stats/noncentralFLogCdf.js';
import { noncentralFLogSf } from '../../src/stats/noncentralFLogSf.js';
import { normalLogSf } from '../../src/stats/normalLogSf.js';
import { pearsonChiSquared } from '../../src/stats/pearsonChiSquared.js';
import { tLogSf } from '../../src/stats/tLogSf.js';

/** The families of arguments, as the scripts in this folder name them, and their shapes. */
export const families = {
  chiSquared: { argumentsEach: 2, valuesEach: 2 },
  f: { argumentsEach: 3, valuesEach: 1 },
  t: { argumentsEach: 2, valuesEach: 1 },
  normal: { argumentsEach: 1, valuesEach: 1 },
  betaBinomial: { argumentsEach: 4, valuesEach: 2 },
  hypergeometric: { argumentsEach: 4, valuesEach: 2 },
  noncentralChiSquared: { argumentsEach: 3, valuesEach: 2 },
  noncentralF: { argumentsEach: 4, valuesEach: 2 },
  tables: { argumentsEach: 102, valuesEach: 4 },
} as const;

export type Family = keyof typeof families;
export const familyNames = Object.keys(families) as readonly Family[];

/** One function of ours, held against one column of what the oracles said. */
export interface Method {
  readonly name: string;
  readonly family: Family;
  readonly column: number;
  /** Largest relative error allowed. */
  readonly goal: number;
  readonly ours: (row: readonly number[]) => number;
}

// The goals set for the project: of log p for central and noncentral tails, and of statistics.
const central = 1e-10;
const noncentral = 1e-8;
const ofStatistic = 1e-12;

type OfNumbers = (...row: number[]) => number;

function plain(family: Family, column: number, goal: number, ours: OfNumbers): Method {
  return { name: ours.name, family, column, goal, ours: (row) => ours(...row) };
}

interface Counted {
  readonly n: number;
  readonly alpha: number;
  readonly beta: number;
  readonly k: number;
}

function betaBinomial(column: number, ours: (point: Counted) => number): Method {
  const at = ([n, alpha, beta, k]: readonly number[]) => ours({ n, alpha, beta, k });
  return { name: ours.name, family: 'betaBinomial', column, goal: central, ours: at };
}

interface Urn {
  readonly total: number;
  readonly marked: number;
  readonly drawn: number;
  readonly k: number;
}

function hypergeometric(column: number, ours: (point: Urn) => number): Method {
  const at = ([total, marked, drawn, k]: readonly number[]) => ours({ total, marked, drawn, k });
  return { name: ours.name, family: 'hypergeometric', column, goal: central, ours: at };
}

/** A row of counts after its numbers of rows and of columns, as a table. */
function tableOf([rows, columns, ...cells]: readonly number[]): number[][] {
  return Array.from({ length: rows }, (_, i) => cells.slice(i * columns, (i + 1) * columns));
}

type TableTest = typeof pearsonChiSquared;

function tableMethods(column: number, test: TableTest): Method[] {
  const of = (row: readonly number[]) => test(tableOf(row));
  const family = 'tables';
  return [
    {
      name: `${test.name}, statistic`,
      family,
      column,
      goal: ofStatistic,
      ours: (row) => of(row).statistic,
    },
    {
      name: `${test.name}, logP`,
      family,
      column: column + 1,
      goal: central,
      ours: (row) => of(row).logP,
    },
  ];
}

/** Every tail and table test, in the order of the report. */
export const methods: readonly Method[] = [
  plain('chiSquared', 0, central, chiSquaredLogSf),
  plain('chiSquared', 1, central, chiSquaredLogCdf),
  plain('f', 0, central, fLogSf),
  plain('t', 0, central, tLogSf),
  plain('normal', 0, central, normalLogSf),
  betaBinomial(0, betaBinomialLogSf),
  betaBinomial(1, betaBinomialLogCdf),
  hypergeometric(0, hypergeometricLogSf),
  hypergeometric(1, hypergeometricLogCdf),
  plain('noncentralChiSquared', 0, noncentral, noncentralChiSquaredLogSf),
  plain('noncentralChiSquared', 1, noncentral, noncentralChiSquaredLogCdf),
  plain('noncentralF', 0, noncentral, noncentralFLogSf),
  plain('noncentralF', 1, noncentral, noncentralFLogCdf),
  ...tableMethods(0, pearsonChiSquared),
  ...tableMethods(2, likelihoodRatio),
];
