import { describe, expect, it } from 'vitest';

import { differences, answersOf, readSample, sampled } from '../accuracy/fixtures.js';
import { judge } from '../accuracy/judgement.js';
import { measure, relativeError } from '../accuracy/measure.js';
import { familyNames, methods } from '../accuracy/methods.js';
import type { Method } from '../accuracy/methods.js';
import { tableOf } from '../accuracy/report.js';
import { chiSquaredLogCdf } from '../../src/stats/chiSquaredLogCdf.js';

// The committed sample: arguments, R's values and mpmath's, made by test/accuracy/make.sh (R 4.2.2,
// mpmath 1.2.1, 40 digits). `npm run accuracy` makes them anew and compares all 10,000 rows.
const sample = readSample();
const fixtures = new Map(familyNames.map((family) => [family, sampled(sample, family)]));
const lines = judge(fixtures, (asked) => answersOf(sample, asked));

describe('tails and table tests against R and mpmath', () => {
  it.each(methods.map(({ name }) => name))('%s meets its goal all over the sample', (name) => {
    const own = lines.filter(({ method }) => method.name === name);
    const exact = own.find(({ oracle }) => oracle === 'mpmath');
    expect(exact?.compared).toBeGreaterThanOrEqual(100);
    expect(own.flatMap(({ missed }) => missed)).toEqual([]);
  });

  it('the sample goes down to tails of about e^-10,000 in every family', () => {
    // the first rows of arguments.py aim at -10,000
    const deepest = familyNames.map((family) =>
      Math.min(...sampled(sample, family).exact.flat().filter(Number.isFinite)),
    );
    for (const depth of deepest) expect(depth).toBeLessThan(-9000);
  });

  it('a tail taken as one minus the body is found out, and where', () => {
    const upper = methods.find(({ name }) => name === 'chiSquaredLogSf');
    const naive = ([x, df]: readonly number[]) => Math.log(1 - Math.exp(chiSquaredLogCdf(x, df)));
    const { rows, exact } = sampled(sample, 'chiSquared');
    const { beyond } = measure({ ...(upper as Method), ours: naive }, rows, exact);
    expect(beyond.length).toBeGreaterThan(50);
    expect(beyond[0].row).toEqual(rows[beyond[0].at]);
  });

  it('one digit that differs from the sample made anew is named', () => {
    const anew = structuredClone(sample);
    (anew.t.rows[7] as number[][])[1][0] += 1e-9;
    expect(differences(sample, anew)).toEqual(['t: row 7 differs']);
    expect(differences(sample, structuredClone(sample))).toEqual([]);
  });

  it('what R gets wrong counts as its fault only when mpmath says so', () => {
    const wrong = structuredClone(sample);
    (wrong.t.rows[7] as number[][])[2][0] *= 1.001;
    const withFault = new Map(familyNames.map((family) => [family, sampled(wrong, family)]));
    const ofT = (decided: typeof sample | undefined) =>
      judge(withFault, (asked) => (decided ? answersOf(decided, asked) : new Map())).find(
        ({ method, oracle }) => method.family === 't' && oracle === 'R',
      );
    expect(ofT(sample)).toMatchObject({ missed: [], oracleWrong: [{ at: 7 }] });
    expect(ofT(undefined)).toMatchObject({ missed: [{ at: 7 }], oracleWrong: [] });
    expect(tableOf([ofT(undefined)].filter((line) => line !== undefined))).toContain('MISSED');
  });

  it('an error is relative, infinite for no number, and none between equal infinities', () => {
    expect(relativeError(-101, -100)).toBeCloseTo(0.01, 15);
    expect(relativeError(-1.01e-20, -1e-20)).toBeCloseTo(0.01, 12);
    expect(relativeError(NaN, -1)).toBe(Infinity);
    expect(relativeError(-Infinity, -Infinity)).toBe(0);
  });
});
