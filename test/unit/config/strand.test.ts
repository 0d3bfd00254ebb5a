import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { MISSING, POOLED, REST } from '../../../src/config/strand.js';
import { escapeCategory, unescapeCategory } from '../../../src/config/strand.js';
import { parseStrandKey, strandKey } from '../../../src/config/strand.js';

const runs = { seed: 20_261_103, numRuns: 500 };

describe('a strand key', () => {
  const cases: [[string, string][], string][] = [
    [[], 'all'],
    [
      [
        ['zone', 'a'],
        ['region', 'north'],
      ],
      'region=north,zone=a',
    ],
    [[['region', 'a,b=c\\d']], 'region=a\\,b\\=c\\\\d'],
    [[['region', MISSING]], 'region=(missing)'],
    [[['region', escapeCategory('(x)')]], 'region=\\\\(x)'],
    [[['region', '']], 'region='],
  ];
  it.each(cases)('of %j is %s, and reads back', (values, key) => {
    expect(strandKey(values)).toBe(key);
    expect(parseStrandKey(key)).toEqual(Object.fromEntries(values));
  });

  it('gives any fields and values back', () => {
    const pairs = fc.uniqueArray(fc.tuple(fc.string(), fc.string()), {
      maxLength: 3,
      selector: ([field]) => field,
    });
    fc.assert(
      fc.property(pairs, (values) => {
        expect(new Map(Object.entries(parseStrandKey(strandKey(values))))).toEqual(
          new Map(Object.entries(Object.fromEntries(values))),
        );
      }),
      runs,
    );
  });

  it.each(['', 'region', 'a=b=c', 'a=b,c'])('%j is refused', (key) => {
    expect(() => parseStrandKey(key)).toThrow(
      `strand "${key}" is not all or field=value,...; write e.g. region=north`,
    );
  });
});

describe('a category text', () => {
  const cases: [string, string][] = [
    ['approved', 'approved'],
    ['a(b)', 'a(b)'],
    ['\\n', '\\n'],
    ['(rest)', '\\(rest)'],
    ['\\(rest)', '\\\\(rest)'],
  ];
  it.each(cases)('of the value %j is %j, and reads back', (value, category) => {
    expect(escapeCategory(value)).toBe(category);
    expect(unescapeCategory(category)).toBe(value);
  });

  it('is never that of another value, nor a made category', () => {
    const odd = fc.string({ unit: fc.constantFrom('\\', '(', 'r', ')'), maxLength: 6 });
    fc.assert(
      fc.property(odd, (value) => {
        const category = escapeCategory(value);
        expect(unescapeCategory(category)).toBe(value);
        expect([REST, MISSING, POOLED]).not.toContain(category);
        expect(category.startsWith('(')).toBe(false);
      }),
      runs,
    );
  });
});
