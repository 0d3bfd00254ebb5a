import { describe, it } from 'vitest';

import { report } from './full.js';
import { measurePeers, measureWander } from './peers.js';

describe('strands held against each other, and against themselves', () => {
  it('a strand is seldom called shifted while its peers do what it does', () => {
    report('Peers, K = 12, N = 2000, rho .002', () =>
      measurePeers({ seed: 900, baselines: 200, each: 1000 }),
    );
  });

  it('independent windows are seldom said to wander', () => {
    report('Wander', () => measureWander({ seed: 950, repetitions: 4000 }));
  });
});
