import { describe, expect, it } from 'vitest';
import { fromJson, toJson } from '../../../../src/store/sqlite/json.js';

describe('stored JSON', () => {
  it('gives numbers back that plain JSON would lose', () => {
    const value = { logP: -Infinity, statistic: Infinity, none: NaN, zero: -0, list: [-0, 0, 1] };
    expect(fromJson(toJson(value))).toEqual(value);
    // The twin: plain JSON does lose them.
    expect(JSON.parse(JSON.stringify(value))).not.toEqual(value);
  });

  it('leaves a text or an object alone that only looks like such a number', () => {
    const value = { a: '$number', b: { $number: 'many' }, c: { $number: 'NaN', more: 1 }, d: -0 };
    expect(fromJson(toJson(value))).toEqual(value);
  });

  it('is plain JSON for plain values', () => {
    expect(toJson({ a: [1, 'x', null, true] })).toBe('{"a":[1,"x",null,true]}');
  });

  it.each([
    ['a map', { seen: new Map([[1, 2]]) }, `under 'seen'`],
    ['a set', { seen: new Set([1]) }, `under 'seen'`],
    ['a big integer', { big: 1n }, `under 'big'`],
    ['a function', { f: () => 1 }, `under 'f'`],
    ['nothing', undefined, 'cannot store undefined'],
  ])('refuses %s instead of losing it', (_what, value, message) => {
    expect(() => toJson(value)).toThrow(message);
  });
});
