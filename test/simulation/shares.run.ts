import { describe, it } from 'vitest';

import { measureBlame } from './blame.js';
import { report } from './full.js';
import { measureGate } from './gate.js';
import { measurePlanning } from './planning.js';
import { measureSince } from './since.js';

describe('what an alert says, and what it is withheld for', () => {
  it('peeling blames a category that did not move in at most a tenth of the cases', () => {
    report('False blame of peeling', () => measureBlame({ seed: 300, repetitions: 4000 }));
  });

  it('the span of starts holds the true one in nine cases of ten', () => {
    report('Since when', () => measureSince({ seed: 400, repetitions: 1500 }));
  });

  it('a shift of exactly the tolerance passes the gate in at most one case of twenty', () => {
    report('Gate at the tolerance', () => measureGate({ seed: 500, repetitions: 4000 }));
  });

  it('planned power is found within 6 points', () => {
    report('Planning for power .8', () => measurePlanning({ seed: 600, repetitions: 4000 }));
  });
});
