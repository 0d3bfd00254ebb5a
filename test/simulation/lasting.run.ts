import { describe, it } from 'vitest';

import { measureCreep } from './creep.js';
import { measureEnding } from './ending.js';
import { report } from './full.js';

describe('what only a run of windows shows', () => {
  it('creep is found as soon as the design says, and seldom where there is none', () => {
    report('Creep, K = 12, N = 500, threshold 1e4', () =>
      measureCreep({ seed: 700, calm: 300, shifts: 400 }),
    );
  });

  it('an alert ends when the fault is mended, and stays while it lasts', () => {
    report('End of an alert, B = 24', () => measureEnding({ seed: 800, repetitions: 400 }));
  });
});
