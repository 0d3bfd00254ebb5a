import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  addEntries,
  packCounts,
  unpackCounts,
  type Entry,
} from '../../../../src/store/sqlite/pack.js';

const SEED = 20_240_611;
const RUNS = 300;
const MAX = Number.MAX_SAFE_INTEGER;

const count = fc.oneof(fc.nat(200), fc.maxSafeNat());
const entries = fc
  .uniqueArray(
    fc.record({ id: fc.oneof(fc.nat(300), fc.maxSafeNat()), onTime: count, late: count }),
    {
      selector: (entry) => entry.id,
      maxLength: 60,
    },
  )
  .map((list) => list.sort((a, b) => a.id - b.id));
const smallEntries = fc
  .array(fc.record({ id: fc.nat(12), onTime: fc.nat(1e6), late: fc.nat(1e6) }), { maxLength: 20 })
  .map((list) => list.sort((a, b) => a.id - b.id));

/** Entry by entry in a map: slow, and plainly right. */
function sumById(...lists: readonly (readonly Entry[])[]): Entry[] {
  const sums = new Map<number, Entry>();
  for (const { id, onTime, late } of lists.flat()) {
    const before = sums.get(id) ?? { onTime: 0, late: 0 };
    sums.set(id, { id, onTime: before.onTime + onTime, late: before.late + late });
  }
  return [...sums.values()].sort((a, b) => a.id - b.id);
}

describe('packed counts', () => {
  it('write 300 as the two bytes of its varint, so the format is the published one', () => {
    // 300 = 0xAC 0x02: Protocol Buffers documentation, Encoding, "Base 128 Varints".
    const bytes = packCounts([{ id: 300, onTime: 1, late: 0 }]);
    expect([...bytes]).toEqual([1, 1, 0xac, 0x02, 1, 0]);
  });

  it('come back as they were, whatever the counts', () => {
    const same = fc.property(entries, (list) => {
      expect(unpackCounts(packCounts(list))).toEqual(list);
    });
    fc.assert(same, { seed: SEED, numRuns: RUNS });
  });

  it('come back as they were at the ends of the range', () => {
    const list = [
      { id: 0, onTime: 0, late: MAX },
      { id: 127, onTime: 2 ** 31 - 1, late: 2 ** 31 },
      { id: 128, onTime: 2 ** 32 - 1, late: 2 ** 32 },
      { id: MAX, onTime: MAX, late: 0 },
    ];
    expect(unpackCounts(packCounts(list))).toEqual(list);
    expect(unpackCounts(packCounts([]))).toEqual([]);
  });

  it('are refused when any last bytes are missing', () => {
    const cut = fc.property(entries, fc.nat(), (list, seed) => {
      const bytes = packCounts(list);
      const length = seed % bytes.length;
      expect(() => unpackCounts(bytes.subarray(0, length))).toThrow(/a stored tally is damaged/);
    });
    fc.assert(cut, { seed: SEED, numRuns: RUNS });
  });

  it.each([
    ['another format', [2, 0], 'its format is 2, not 1'],
    ['no bytes', [], 'its format is undefined, not 1'],
    ['bytes too many', [1, 0, 0], 'it is longer than it says'],
    ['a number of entries that cannot be', [1, 200, 1, 1, 1, 1], 'it is shorter than it says'],
    ['a repeated category', [1, 2, 5, 1, 0, 5, 1, 0], 'its categories are out of order'],
    ['a number over 2^53 - 1', [1, 1, ...Array<number>(7).fill(255), 127, 0, 0], 'too large'],
    ['a number of nine bytes', [1, 1, ...Array<number>(9).fill(128), 0, 0], 'too large'],
    ['an end inside a number', [1, 1, 1, 1, 128], 'it ends inside a number'],
  ])('with %s are refused with the reason', (_what, bytes, reason) => {
    expect(() => unpackCounts(Uint8Array.from(bytes))).toThrow(reason);
  });
});

describe('adding entries', () => {
  it('gives what adding one by one gives, also with repeated categories', () => {
    const same = fc.property(smallEntries, smallEntries, (left, right) => {
      expect(addEntries(left, right)).toEqual(sumById(left, right));
    });
    fc.assert(same, { seed: SEED, numRuns: RUNS });
  });

  it('refuses a sum that is no longer exact, and takes the largest that is', () => {
    const almost = [{ id: 1, onTime: MAX - 1, late: 0 }];
    const one = [{ id: 1, onTime: 1, late: 0 }];
    expect(addEntries(almost, one)).toEqual([{ id: 1, onTime: MAX, late: 0 }]);
    expect(() => addEntries(almost, [{ id: 1, onTime: 2, late: 0 }])).toThrow(/over 2\^53 - 1/);
    expect(() => addEntries(almost, [{ id: 1, onTime: 0, late: 2 }])).toThrow(/over 2\^53 - 1/);
  });
});
