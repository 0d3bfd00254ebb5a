import type { Fixture } from './fixtures.js';
import { measure, relativeError } from './measure.js';
import type { Measured, Miss } from './measure.js';
import type { Family, Method } from './methods.js';
import { methods } from './methods.js';

type Rows = readonly (readonly number[])[];

/** mpmath's values at rows of a family, asked for where ours and R's disagree. */
export type Decide = (asked: ReadonlyMap<Family, Rows>) => ReadonlyMap<Family, Rows>;

/** Rows of a family that mpmath is asked about at most; with more, the goal counts as missed. */
const MOST_ASKED = 300;

/** One line of the report: a method against one oracle. */
export interface Line {
  readonly method: Method;
  readonly oracle: 'mpmath' | 'R';
  readonly compared: number;
  readonly deepest: number;
  readonly worst: Miss | undefined;
  /** Where the goal is missed. */
  readonly missed: readonly Miss[];
  /** Where ours and the oracle disagree and the other oracle says that ours is right. */
  readonly oracleWrong: readonly Miss[];
}

/**
 * Every method against both oracles. Where ours and R's differ by more than the goal, `decide`
 * gives mpmath's value, and ours is held to that one; R's fault is then reported as R's. There is
 * no line where an oracle has no value at all.
 */
export function judge(fixtures: ReadonlyMap<Family, Fixture>, decide: Decide): Line[] {
  const of = ({ family }: Method): Fixture => {
    const fixture = fixtures.get(family);
    if (fixture === undefined) throw new RangeError(`fixtures: nothing for ${family}`);
    return fixture;
  };
  const exact = methods.map((m) => measure(m, of(m).rows, of(m).exact));
  const byR = methods.map((m) => measure(m, of(m).rows, of(m).byR));
  const decided = truths(byR, decide);
  const lines = methods.flatMap((_, at) => [mpmathLine(exact[at]), rLine(byR[at], decided)]);
  return lines.filter(({ compared }) => compared > 0);
}

type Truths = ReadonlyMap<Family, ReadonlyMap<number, readonly number[]>>;

/** mpmath's values at every row where any method of a family disagrees with R. */
function truths(byR: readonly Measured[], decide: Decide): Truths {
  const asked = new Map<Family, Map<number, readonly number[]>>();
  for (const { method, beyond } of byR) {
    if (method.family === 'tables') continue;
    const rows = asked.get(method.family) ?? new Map<number, readonly number[]>();
    for (const { at, row } of beyond) if (rows.size < MOST_ASKED) rows.set(at, row);
    if (rows.size > 0) asked.set(method.family, rows);
  }
  if (asked.size === 0) return new Map();
  const answers = decide(new Map([...asked].map(([family, rows]) => [family, [...rows.values()]])));
  return new Map(
    [...asked].map(([family, rows]) => {
      const values = answers.get(family) ?? [];
      return [family, new Map([...rows.keys()].map((at, i) => [at, values[i] ?? []]))];
    }),
  );
}

const line = (oracle: Line['oracle'], { method, compared, deepest, worst }: Measured) => ({
  method,
  oracle,
  compared,
  deepest,
  worst,
});

function mpmathLine(measured: Measured): Line {
  return { ...line('mpmath', measured), missed: measured.beyond, oracleWrong: [] };
}

function rLine(measured: Measured, decided: Truths): Line {
  const { method, beyond, worstWithin } = measured;
  const ofFamily = decided.get(method.family);
  const held = beyond.map((miss) => {
    const truth = ofFamily?.get(miss.at)?.[method.column] ?? NaN;
    return { miss, error: relativeError(miss.ours, truth) };
  });
  const right = held.filter(({ error }) => error <= method.goal);
  const missed = held.filter(({ error }) => error > method.goal).map(({ miss }) => miss);
  const decidedWorst = right.map(({ miss, error }) => ({ ...miss, error }));
  const candidates = [...missed, ...decidedWorst, ...(worstWithin ? [worstWithin] : [])];
  const worst = candidates.sort((a, b) => b.error - a.error).at(0);
  return { ...line('R', measured), worst, missed, oracleWrong: right.map(({ miss }) => miss) };
}
