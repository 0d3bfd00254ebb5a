import { describe, expect, it } from 'vitest';
import { parseLdml } from '../../../src/clock/ldml.js';
import { timeParser } from '../../../src/clock/time.js';
import type { TimeFormat } from '../../../src/terms/time.js';

const iso = timeParser({ kind: 'iso' }, 'UTC');
const berlin = timeParser({ kind: 'iso' }, 'Europe/Berlin');
const at = (text: string): number => Date.parse(text);

describe('ISO times', () => {
  const cases: [string, string][] = [
    ['2026-11-03T10:05:00Z', '2026-11-03T10:05:00.000Z'],
    ['2026-11-03t10:05:00z', '2026-11-03T10:05:00.000Z'],
    ['2026-11-03 10:05:00Z', '2026-11-03T10:05:00.000Z'],
    ['2026-11-03 10:05:00 +01:00', '2026-11-03T09:05:00.000Z'],
    ['2026-11-03T10:05:00+01:00', '2026-11-03T09:05:00.000Z'],
    ['2026-11-03T10:05:00-0330', '2026-11-03T13:35:00.000Z'],
    ['2026-11-03T10:05:00+05', '2026-11-03T05:05:00.000Z'],
    ['2026-11-03T10:05:00-00:00', '2026-11-03T10:05:00.000Z'],
    ['2026-11-03T10:05:00.5Z', '2026-11-03T10:05:00.500Z'],
    ['2026-11-03T10:05:00,25Z', '2026-11-03T10:05:00.250Z'],
    ['2026-11-03T10:05:00.123999999Z', '2026-11-03T10:05:00.123Z'],
    ['2026-11-03T10:05:59.9999Z', '2026-11-03T10:05:59.999Z'],
    ['20261103T100500Z', '2026-11-03T10:05:00.000Z'],
    ['20261103T1005+0100', '2026-11-03T09:05:00.000Z'],
    ['2026-11-03T10:05', '2026-11-03T10:05:00.000Z'],
    ['2026-11-03T10', '2026-11-03T10:00:00.000Z'],
    ['2026-11-03', '2026-11-03T00:00:00.000Z'],
    ['20261103', '2026-11-03T00:00:00.000Z'],
    ['2026-11-03T24:00:00Z', '2026-11-04T00:00:00.000Z'],
    ['2028-02-29T00:00:00Z', '2028-02-29T00:00:00.000Z'],
    ['0050-01-01T00:00:00Z', '0050-01-01T00:00:00.000Z'],
    // The leap second of 2016 (IERS Bulletin C 52, from memory).
    ['2016-12-31T23:59:60Z', '2016-12-31T23:59:59.999Z'],
    ['2017-01-01T00:59:60+01:00', '2016-12-31T23:59:59.999Z'],
  ];
  it.each(cases)('read %s as %s', (text, expected) => {
    expect(iso(text)).toBe(at(expected));
  });

  const wrong = [
    ...['', 'now', '2026-11-3T10:05:00Z', '2026-13-03T10:05:00Z', '2026-02-30T10:05:00Z'],
    ...['2026-02-29', '2026-11-03T25:00:00Z', '2026-11-03T24:00:01Z', '2026-11-03T10:60:00Z'],
    ...['2026-11-03T10:05:61Z', '2026-11-03T10:05:60Z', '2026-11-03T10:05:00.Z'],
    ...['2026-11-03T10:05:00+24:00', '2026-11-03T10:05:00+01:60', '2026-11-03T10:05:00Zx'],
    ...['2026-1103', '202611-03', '2026-11-03T10:0500Z', ' 2026-11-03', '2026-11-03Z'],
    ...[`2026-11-03T10:05:00.${'0'.repeat(60)}Z`, '2026-11-03T1a:05:00Z', '2026-00-03'],
  ];
  it.each(wrong)('refuse %j', (text) => {
    expect(iso(text)).toBeNull();
  });

  // Berlin's changes in 2026: IANA time zone database, from memory.
  it('without a zone are local, the earlier one where the clocks repeat', () => {
    expect(berlin('2026-11-03T10:05:00')).toBe(at('2026-11-03T09:05:00Z'));
    expect(berlin('2026-11-03')).toBe(at('2026-11-02T23:00:00Z'));
    expect(berlin('2026-10-25T02:30:00')).toBe(at('2026-10-25T00:30:00Z'));
  });

  it('in a skipped hour are read with the offset before it', () => {
    expect(berlin('2026-03-29T02:30:00')).toBe(at('2026-03-29T01:30:00Z'));
  });

  it('are read the same when the day before differs', () => {
    expect(iso('2026-02-30T10:05:00Z')).toBeNull();
    expect(iso('2026-03-01T10:05:00Z')).toBe(at('2026-03-01T10:05:00Z'));
    expect(iso('2026-03-02T10:05:00Z')).toBe(at('2026-03-02T10:05:00Z'));
  });
});

describe('epoch times', () => {
  const cases: ['s' | 'ms' | 'us' | 'ns', string, number | null][] = [
    ['s', '1793700300', 1_793_700_300_000],
    ['s', '1793700300.123', 1_793_700_300_123],
    ['s', '1793700300.1239999', 1_793_700_300_123],
    ['s', '1.7937003e9', 1_793_700_300_000],
    ['s', '-0.0005', -1],
    ['s', '-0', 0],
    ['s', '0', 0],
    ['ms', '1793700300123', 1_793_700_300_123],
    ['ms', '1793700300123.9', 1_793_700_300_123],
    ['us', '1793700300123999', 1_793_700_300_123],
    ['ns', '1793700300123999999', 1_793_700_300_123],
    ['ns', '999999', 0],
    ['ns', '-1', -1],
    // From 1970 to 10000 are 2,932,897 days.
    ['s', '253402300799', 253_402_300_799_000],
    ['s', '253402300800', null],
    ['s', '1793700300123', null],
    ['s', '1e300', null],
    ['s', '', null],
    ['s', '12a', null],
    ['s', '0x10', null],
    ['s', 'NaN', null],
    ['s', '.5', null],
  ];
  it.each(cases)('in %s read %s as %s', (unit, text, expected) => {
    expect(timeParser({ kind: 'epoch', unit }, 'UTC')(text)).toBe(expected);
  });
});

describe('times in an LDML pattern', () => {
  const cases: [string, string, string | null][] = [
    ["yyyy-MM-dd'T'HH:mm:ss.SSSXXX", '2026-11-03T10:05:00.250+01:00', '2026-11-03T09:05:00.250Z'],
    ['dd/MMM/yyyy:HH:mm:ss Z', '03/Nov/2026:10:05:00 +0100', '2026-11-03T09:05:00.000Z'],
    ['dd/MMM/yyyy:HH:mm:ss Z', '03/nov/2026:10:05:00 Z', '2026-11-03T10:05:00.000Z'],
    ['EEE, d MMM yyyy h:mm a', 'Tue, 3 Nov 2026 12:05 AM', '2026-11-03T00:05:00.000Z'],
    ['EEE, d MMM yyyy h:mm a', 'Tue, 3 Nov 2026 12:05 pm', '2026-11-03T12:05:00.000Z'],
    ['MMM d yyyy', 'Nov  3 2026', '2026-11-03T00:00:00.000Z'],
    ['EEEE d MMMM y', 'Tuesday 3 November 2026', '2026-11-03T00:00:00.000Z'],
    ['yyyyMMddHHmmssSSS', '20261103100500250', '2026-11-03T10:05:00.250Z'],
    ['dd.MM.yy', '03.11.68', '2068-11-03T00:00:00.000Z'],
    ['dd.MM.yy', '03.11.69', '1969-11-03T00:00:00.000Z'],
    ["d.M.y H 'o''clock'", "3.11.2026 9 o'clock", '2026-11-03T09:00:00.000Z'],
    ['dd/MMM/yyyy', '03/Nom/2026', null],
    ['dd/MMM/yyyy', '31/Feb/2026', null],
    ['yyyy-MM-dd HH', '2026-11-03 24', null],
    ['yyyy-MM-dd h a', '2026-11-03 13 am', null],
    ['yyyy-MM-dd', '2026-11-03x', null],
    ['yyyy.MM.dd', '2026-11-03', null],
    ['yyyy-MM-dd HH:mm x', '2026-11-03 10:05 +25', null],
  ];
  it.each(cases)('%s read %s as %s', (pattern, text, expected) => {
    const read = timeParser({ kind: 'ldml', pattern }, 'UTC')(text);
    expect(read).toBe(expected === null ? null : at(expected));
  });

  it('without a zone field are local', () => {
    const format: TimeFormat = { kind: 'ldml', pattern: 'yyyy-MM-dd HH:mm' };
    expect(timeParser(format, 'Asia/Kathmandu')('2026-11-03 10:05')).toBe(
      at('2026-11-03T04:20:00Z'),
    );
  });

  const wrong: [string, string][] = [
    ['yyyy-MM-dd QQ', 'has the letter Q, which is not read; '],
    ['yyy-MM-dd', 'has yyy, which is not read; write one of y, yy, yyyy'],
    ['MM-dd', 'has no y; write a year, a month and a day'],
    ['yyyy-MM-dd d', 'has d twice; write each field once'],
    ['yyyy-MM-dd h', 'needs h and a together; write both, or H for 0 to 23'],
    ['yyyy-MM-dd h H a', 'has both h and H; write one of them'],
    ['yyyy-MM-dd X x', 'has two zone fields; write one of Z, X and x'],
    ['yyyy-MM-dd HH:mm S', 'has a fraction without seconds; write s before S'],
    ['yyyy-MM-dd HH ss', 'has seconds without minutes; write m before s'],
    ['yyyy-MM-dd mm', 'has minutes without hours; write H before m'],
    ["yyyy-MM-dd 'x", "has a quote that does not end; write '' for a quote"],
    ['y'.repeat(129), 'is longer than 128 characters; write a shorter pattern'],
  ];
  it.each(wrong)('%s is refused, since it %s', (pattern, problem) => {
    const read = parseLdml(pattern);
    expect('problem' in read ? read.problem : '').toContain(problem);
    expect(() => timeParser({ kind: 'ldml', pattern }, 'UTC')).toThrow(problem);
  });
});
