import fc from 'fast-check';
import { describe, expect, it } from 'vitest';

import { absenceThreshold } from '../../../src/stats/absence.js';
import { creepThreshold } from '../../../src/stats/creepThreshold.js';
import { detectableShift } from '../../../src/stats/detectableShift.js';
import { dispersionFloor } from '../../../src/stats/dispersionFloor.js';
import { eventsNeeded } from '../../../src/stats/eventsNeeded.js';
import { gatePower } from '../../../src/stats/gatePower.js';
import { requiredNoncentrality } from '../../../src/stats/requiredNoncentrality.js';
import { expectAtMost, expectSame } from './arbitraries.js';

const RUNS = { seed: 606, numRuns: 25 };
const plans = fc.record({
  share: fc.double({ min: 0.02, max: 0.6, noNaN: true }),
  categories: fc.integer({ min: 2, max: 20 }),
  baselineWindows: fc.integer({ min: 8, max: 96 }),
  rho: fc.constantFrom(0, 0.0005, 0.002, 0.01),
  alpha: fc.constantFrom(1e-6, 1e-4, 1e-2),
  power: fc.constantFrom(0.5, 0.8, 0.95),
});
const beyond = (value: number | null): number => value ?? Infinity;

describe('plans', () => {
  it('requiredNoncentrality: more power or a stricter level ask for more', () => {
    fc.assert(
      fc.property(plans, ({ categories, baselineWindows, alpha, power }) => {
        const df1 = categories - 1;
        const input = { df1, df2: (baselineWindows - 1) * df1, alpha, power };
        const lambda = requiredNoncentrality(input);
        expect(lambda).toBeGreaterThan(0);
        expectAtMost(lambda, requiredNoncentrality({ ...input, power: 0.96 }));
        expectAtMost(lambda, requiredNoncentrality({ ...input, alpha: alpha / 10 }));
        expectAtMost(lambda, requiredNoncentrality({ ...input, df2: input.df2 / 2 }));
      }),
      RUNS,
    );
  });

  it('detectableShift: more events find less, never under the floor, the gate only adds', () => {
    fc.assert(
      fc.property(plans, fc.integer({ min: 100, max: 20_000 }), (plan, events) => {
        const input = { ...plan, events, baselineEvents: events, tolerance: 0 };
        const found = beyond(detectableShift(input).testPoints);
        const more = { ...input, events: 4 * events, baselineEvents: 4 * events };
        expectAtMost(beyond(detectableShift(more).testPoints), found);
        expectAtMost(beyond(dispersionFloor(plan).exactPoints), found);
        const gated = detectableShift({ ...input, tolerance: 0.01 });
        expectAtMost(found, beyond(gated.detectablePoints));
      }),
      RUNS,
    );
  });

  it('eventsNeeded: larger shifts need fewer, and as many as that are enough', () => {
    fc.assert(
      fc.property(plans, fc.double({ min: 2, max: 15, noNaN: true }), (plan, points) => {
        const input = { ...plan, points, tolerance: 0 };
        const needed = eventsNeeded(input).testEvents;
        expectAtMost(
          beyond(eventsNeeded({ ...input, points: 2 * points }).testEvents),
          beyond(needed),
        );
        if (needed === null || needed > 1e9) return;
        const window = { ...plan, events: needed, baselineEvents: needed, tolerance: 0 };
        expectAtMost(beyond(detectableShift(window).testPoints), points);
      }),
      RUNS,
    );
  });

  it('gatePower: grows with the shift, falls with the tolerance', () => {
    const delta = fc.double({ min: 0.001, max: 0.3, noNaN: true });
    fc.assert(
      fc.property(plans, delta, ({ share, categories }, shift) => {
        const weights = { weightNow: 400, weightReference: 9000 };
        const point = { share, delta: shift, ...weights, categories, df2: 90, tolerance: 0.01 };
        const power = gatePower(point);
        expect(power).toBeGreaterThanOrEqual(0);
        expect(power).toBeLessThanOrEqual(1);
        expectAtMost(power, gatePower({ ...point, delta: shift + 0.05 }));
        expectAtMost(gatePower({ ...point, tolerance: 0.02 }), power);
      }),
      RUNS,
    );
  });

  it('creepThreshold and absenceThreshold: a larger budget never asks for more evidence', () => {
    const positive = fc.double({ min: 0.01, max: 5000, noNaN: true });
    fc.assert(
      fc.property(positive, positive, positive, (strands, windowsPerWeek, falseAlarmsPerWeek) => {
        const input = { strands, windowsPerWeek, falseAlarmsPerWeek };
        const larger = { ...input, falseAlarmsPerWeek: 2 * falseAlarmsPerWeek };
        expectAtMost(creepThreshold(larger), creepThreshold(input));
        expectAtMost(absenceThreshold(larger), absenceThreshold(input));
        const swapped = { ...input, strands: windowsPerWeek, windowsPerWeek: strands };
        expectSame(creepThreshold(swapped), creepThreshold(input));
      }),
      RUNS,
    );
  });
});
