import { describe, expect, it } from 'vitest';
import type { WhereConfig } from '../../../src/config/types.js';
import { WantedFields } from '../../../src/decode/fields.js';
import { NOT_SCALAR } from '../../../src/decode/types.js';
import type { FieldValue } from '../../../src/decode/types.js';
import { compileWhere } from '../../../src/decode/where.js';

const nothing = { is: null, atLeast: null, atMost: null, matches: null, missing: null };

function holds(value: FieldValue, ...conditions: Partial<WhereConfig>[]): boolean | undefined {
  const wanted = new WantedFields();
  const where = conditions.map((entry) => ({ ...nothing, field: ['a'], ...entry }));
  return compileWhere(where, (path) => wanted.slotOf(path))?.([value]);
}

describe('where', () => {
  const cases: readonly [string, FieldValue, Partial<WhereConfig>, boolean][] = [
    ['a listed text', 'b', { is: ['a', 'b'] }, true],
    ['an unlisted text', 'c', { is: ['a', 'b'] }, false],
    ['a number written otherwise', '1.0', { is: ['1'] }, false],
    ['a missing value for is', null, { is: ['a'] }, false],
    ['a number on the lower bound', '500', { atLeast: 500 }, true],
    ['a number below the bound', '499.9', { atLeast: 500 }, false],
    ['a number on the upper bound', '5e2', { atMost: 500 }, true],
    ['a number above the bound', '501', { atMost: 500 }, false],
    ['text that is no number', 'many', { atMost: 500 }, false],
    ['the empty text', '', { atMost: 500 }, false],
    ['a missing number', null, { atMost: 500 }, false],
    ['a match inside the text', 'api/pay/7', { matches: 'pay/\\d' }, true],
    ['no match', 'api/pay/x', { matches: 'pay/\\d' }, false],
    ['a missing value where it must be', null, { missing: true }, true],
    ['a value where none may be', 'a', { missing: true }, false],
    ['a value where one must be', 'a', { missing: false }, true],
    ['an object where a value must be', NOT_SCALAR, { missing: false }, true],
    ['an object for is', NOT_SCALAR, { is: ['a'] }, false],
    ['an object for a pattern', NOT_SCALAR, { matches: '.*' }, false],
    ['one key that fails of two', '600', { atLeast: 500, atMost: 599 }, false],
    ['two keys that hold', '503', { atLeast: 500, atMost: 599 }, true],
  ];
  it.each(cases)('given %s, decides as documented', (_title, value, condition, expected) => {
    expect(holds(value, condition)).toBe(expected);
  });

  it('given several conditions, all must hold', () => {
    expect(holds('ab', { matches: 'a' }, { matches: 'b' })).toBe(true);
    expect(holds('ab', { matches: 'a' }, { matches: 'c' })).toBe(false);
  });

  it('given no conditions, has nothing to check', () => {
    expect(holds('a')).toBeUndefined();
  });
});
