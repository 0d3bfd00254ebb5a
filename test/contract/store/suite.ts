import { describe } from 'vitest';
import { countingContract } from './counting.js';
import type { Open } from './opened.js';
import { outboxContract } from './outbox.js';
import { readingContract } from './reading.js';
import { roundsContract } from './rounds.js';
import { verdictsContract } from './verdicts.js';

/** What every form of the store must do. Each test opens a new, empty store of its own. */
export function storeContract(name: string, open: Open): void {
  describe(`a ${name} store`, () => {
    describe('while counting', () => {
      countingContract(open);
    });
    describe('when tallies are read', () => {
      readingContract(open);
    });
    describe('when rounds are committed', () => {
      roundsContract(open);
    });
    describe('when verdicts are read', () => {
      verdictsContract(open);
    });
    describe('as an outbox', () => {
      outboxContract(open);
    });
  });
}
