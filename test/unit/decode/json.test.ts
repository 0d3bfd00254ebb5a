import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { NOT_SCALAR } from '../../../src/decode/types.js';
import { decodeText } from './decodeHelper.js';

const json = (text: string, ...paths: string[]) => decodeText({ kind: 'json' }, text, paths);

/** What JavaScript's own parser says of a text: an object, or nothing we call a record. */
function isRecord(text: string): boolean {
  try {
    const value: unknown = JSON.parse(text);
    return typeof value === 'object' && value !== null && !Array.isArray(value);
  } catch (error) {
    if (error instanceof SyntaxError) return false;
    throw error;
  }
}

describe('the json decoder', () => {
  const values: readonly [string, unknown][] = [
    ['"approved"', 'approved'],
    ['""', ''],
    ['"00"', '00'],
    ['200', '200'],
    ['1.0', '1.0'],
    ['1e2', '1e2'],
    ['-0', '-0'],
    ['-1.50E+07', '-1.50E+07'],
    ['12345678901234567890', '12345678901234567890'],
    ['true', 'true'],
    ['false', 'false'],
    ['null', null],
    ['{}', NOT_SCALAR],
    ['{"b":1}', NOT_SCALAR],
    ['[1]', NOT_SCALAR],
    ['"\\u00e9\\n\\"\\\\\\/"', 'é\n"\\/'],
    ['"naïve 日本 😀"', 'naïve 日本 😀'],
    ['"\\ud83d\\ude00"', '😀'],
    ['"\\ud83d"', '\ufffd'],
  ];
  it.each(values)('given the value %s, takes its text as written', (source, expected) => {
    expect(json(`{ "z": [{}], "a" : ${source} , "y": "a" }`, 'a')).toEqual([expected]);
  });

  it('given a path, walks through objects and finds every wanted field once', () => {
    const line = '{"a":{"x":1,"b":{"c":"deep"}},"b":"top"}';
    expect(json(line, 'a.b.c', 'b', 'a.b', 'a.none', 'a.x.c')).toEqual([
      'deep',
      'top',
      NOT_SCALAR,
      null,
      null,
    ]);
  });

  it('given a key that itself holds dots, does not look at it', () => {
    expect(json('{"a.b":1}', 'a.b')).toEqual([null]);
  });

  it('given duplicated keys, lets the last win, whole objects included', () => {
    expect(json('{"a":1,"a":2}', 'a')).toEqual(['2']);
    expect(json('{"a":{"b":1,"c":2},"a":{"c":3}}', 'a.b', 'a.c')).toEqual([null, '3']);
    expect(json('{"a":{"b":1},"a":7}', 'a.b', 'a')).toEqual([null, '7']);
  });

  it('given an escaped key, knows it by its text', () => {
    expect(json('{"\\u0061":1}', 'a')).toEqual(['1']);
  });

  it('given a second record without the field, does not keep the former value', () => {
    expect(json('{"b":1}', 'a')).toEqual([null]);
  });

  const broken = [
    '',
    '5',
    '[1]',
    '"a"',
    'null',
    '{"a":1',
    '{"a":1}}',
    '{"a":1} x',
    '{"a":1,}',
    '{,"a":1}',
    '{a:1}',
    "{'a':1}",
    '{"a":01}',
    '{"a":+1}',
    '{"a":.5}',
    '{"a":1.}',
    '{"a":1e}',
    '{"a":NaN}',
    '{"a":tru}',
    '{"a":[1,]}',
    '{"a":[1 2]}',
    '{"a":{"b"}}',
    '{"a":"\\x"}',
    '{"a":"\\u12g4"}',
    '{"a":"tab\there"}',
    '{"a":[}',
    '{"a":"open}',
    '{"a":"\\',
    '\ufeff{"a":1}',
  ];
  it.each(broken)('given %j, refuses it as malformed, as the language does', (text) => {
    expect(json(text, 'a')).toBe('malformed');
    expect(isRecord(text)).toBe(false);
  });

  it('given containers nested a thousand deep, reads them; deeper is malformed', () => {
    const nested = (depth: number) => `{"a":${'['.repeat(depth)}${']'.repeat(depth)},"b":1}`;
    expect(json(nested(1_000), 'b')).toEqual(['1']);
    expect(json(nested(1_001), 'b')).toBe('malformed');
  });

  it('given JSON, whole or with a byte added, agrees with the language on validity', () => {
    const text = fc
      .tuple(
        fc.jsonValue({ maxDepth: 4 }),
        fc.nat(),
        fc.constantFrom(...Array.from('{}[]",:\\0e-.u x\n')),
      )
      .map(([value, at, byte]) => {
        const whole = JSON.stringify({ a: value, k: [value] });
        const place = at % (whole.length + 1);
        return [whole, whole.slice(0, place) + byte + whole.slice(place + 1)];
      });
    fc.assert(
      fc.property(text, (texts) => {
        for (const one of texts) {
          const ours = json(one, 'a') !== 'malformed';
          expect([one, ours]).toEqual([one, isRecord(one)]);
        }
      }),
      { seed: 41, numRuns: 3_000 },
    );
  });

  it('given any text as a value, gives it back', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme' }), fc.boolean(), (text, ascii) => {
        const written = JSON.stringify(text);
        const source = ascii ? written.replace(/[^ -~]/gu, escapeUnits) : written;
        expect(json(`{"a":${source}}`, 'a')).toEqual([text]);
      }),
      { seed: 42, numRuns: 500 },
    );
  });
});

function escapeUnits(character: string): string {
  return Array.from({ length: character.length }, (_, i) => character.charCodeAt(i))
    .map((unit) => `\\u${unit.toString(16).padStart(4, '0')}`)
    .join('');
}
