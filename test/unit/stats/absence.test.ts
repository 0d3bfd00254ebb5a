import { describe, expect, it } from 'vitest';

import { absence, absenceThreshold } from '../../../src/stats/absence.js';
import { absenceEvidence } from '../../../src/stats/absenceEvidence.js';
import { absenceShape } from '../../../src/stats/absenceShape.js';

// Check values of the specification (section 4.1), to all digits printed there.
const K = 1.9113300492610836;
const L = 11.310342155953316;

describe('absenceShape', () => {
  it('two hours over 14 days give the check value of the specification', () => {
    const shape = absenceShape({ means: [4, 10], variances: [12, 60], days: [14, 14] });
    expect(shape).toBeCloseTo(K, 14);
    // The same by hand: (16 - 12/14 + 100 - 60/14)/(8 + 50).
    expect(shape).toBeCloseTo((116 - 72 / 14) / 58, 14);
  });

  it('counts that vary no more than chance have no shape: Infinity', () => {
    expect(absenceShape({ means: [4, 10], variances: [4, 10], days: [14, 14] })).toBe(Infinity);
    expect(absenceShape({ means: [4, 10], variances: [0, 0], days: [14, 14] })).toBe(Infinity);
    expect(absenceShape({ means: [0], variances: [0], days: [14] })).toBe(Infinity);
  });

  it('an hour too noisy to show its mean adds to the excess alone', () => {
    const shape = absenceShape({ means: [1, 10], variances: [100, 60], days: [14, 14] });
    expect(shape).toBeCloseTo((100 - 60 / 14) / (99 + 50), 14);
    expect(absenceShape({ means: [1], variances: [100], days: [14] })).toBe(0);
  });

  it('what is no mean, variance or number of days is refused by name and value', () => {
    const fine = { means: [4], variances: [12], days: [14] };
    const refused = (part: object): (() => unknown) => {
      return () => absenceShape({ ...fine, ...part });
    };
    expect(refused({ means: [-1] })).toThrow('means[0]: must be a finite number >= 0, got -1');
    expect(refused({ variances: [1, 2] })).toThrow('variances: must have 1 cells, got 2');
    expect(refused({ variances: [NaN] })).toThrow(
      'variances[0]: must be a finite number >= 0, got NaN',
    );
    expect(refused({ days: [] })).toThrow('days: must have 1 cells, got 0');
    expect(refused({ days: [0] })).toThrow('days[0]: must be a finite number >= 1, got 0');
  });
});

describe('absenceEvidence', () => {
  it('a run over means 4, 10, 10, 4 gives the check value of the specification', () => {
    expect(absenceEvidence([4, 10, 10, 4], K)).toBeCloseTo(L, 13);
  });

  it('without excess it is the sum of the means, which large shapes approach', () => {
    expect(absenceEvidence([4, 10, 10, 4], Infinity)).toBe(28);
    expect(absenceEvidence([4, 10, 10, 4], 1e12)).toBeCloseTo(28, 9);
  });

  it('hours that never have events, and no windows, say nothing', () => {
    expect(absenceEvidence([0, 0], K)).toBe(0);
    expect(absenceEvidence([], K)).toBe(0);
    expect(absenceEvidence([4], 0)).toBe(0);
    expect(absenceEvidence([1e9], 1e-320)).toBeCloseTo(0, 300);
  });

  it('what is no mean or shape is refused by name and value', () => {
    expect(() => absenceEvidence([1, Infinity], K)).toThrow(
      'means[1]: must be a finite number >= 0, got Infinity',
    );
    expect(() => absenceEvidence([1], NaN)).toThrow('shape: must be a number >= 0, got NaN');
  });
});

describe('absence', () => {
  it('runs no longer than expected leave nearly all of the evidence: check value', () => {
    const found = absence({ evidence: L, earlier: [3.5, 5.1, 4.0] });
    expect(found.theta).toBeCloseTo(1.1225606358676052, 14);
    expect(found.adjusted).toBeCloseTo(10.402557006877306, 13);
    expect(found.inSpells).toBe(false);
  });

  it('a past of long silences takes most of it away, and says so: check value', () => {
    const found = absence({ evidence: L, earlier: [9, 6, 12] });
    expect(found.theta).toBeCloseTo(4.002560635867606, 14);
    expect(found.adjusted).toBeCloseTo(Math.log(20) + (L - Math.log(20)) / 4.002560635867606, 12);
    expect(found.inSpells).toBe(true);
  });

  it('a strand that was never silent is taken at its word', () => {
    expect(absence({ evidence: L, earlier: [] })).toMatchObject({ theta: 1 });
    expect(absence({ evidence: L, earlier: [] }).adjusted).toBeCloseTo(L, 13);
  });

  it('evidence is never strengthened, and up to log 20 it is left as it is', () => {
    const shortRuns = new Array<number>(50).fill(3);
    expect(absence({ evidence: L, earlier: shortRuns }).theta).toBe(1);
    expect(absence({ evidence: 2, earlier: [9, 6, 12] }).adjusted).toBe(2);
    expect(absence({ evidence: 0, earlier: [9, 6, 12] }).adjusted).toBe(0);
  });

  it('the order of the earlier runs does not matter', () => {
    const one = absence({ evidence: L, earlier: [9.1, 6.3, 12.7, 3.3] });
    expect(absence({ evidence: L, earlier: [12.7, 3.3, 9.1, 6.3] })).toEqual(one);
  });

  it('what is no evidence is refused by name and value', () => {
    expect(() => absence({ evidence: -1, earlier: [] })).toThrow(
      'evidence: must be a finite number >= 0, got -1',
    );
    expect(() => absence({ evidence: 1, earlier: [1, NaN] })).toThrow(
      'earlier[1]: must be a finite number >= 0, got NaN',
    );
  });
});

describe('absenceThreshold', () => {
  it('is the log of the share of the budget that each window may spend', () => {
    const found = absenceThreshold({ strands: 20, windowsPerWeek: 168, falseAlarmsPerWeek: 1 });
    expect(found).toBeCloseTo(-Math.log(0.05 / (20 * 168)), 14);
  });

  it('never falls below 0, and refuses what is not positive', () => {
    const input = { strands: 1, windowsPerWeek: 1, falseAlarmsPerWeek: 100 };
    expect(absenceThreshold(input)).toBe(0);
    expect(() => absenceThreshold({ ...input, strands: 0 })).toThrow(
      'strands: must be a positive finite number, got 0',
    );
    expect(() => absenceThreshold({ ...input, windowsPerWeek: NaN })).toThrow(
      'windowsPerWeek: must be a positive finite number, got NaN',
    );
    expect(() => absenceThreshold({ ...input, falseAlarmsPerWeek: -1 })).toThrow(
      'falseAlarmsPerWeek: must be a positive finite number, got -1',
    );
  });
});
