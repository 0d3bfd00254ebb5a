import { describe, expect, it } from 'vitest';
import { file, problems } from './helper.js';

/** Lines from 11 on are the mix's own. */
const inMix = (line: string) => problems(file({ mix: [line] }));
const inCollector = (...lines: string[]) => problems(file({ collector: lines }));

describe('a line of a mix', () => {
  const noUnit = 'has no unit; write a percentage with its sign, such as 1%';
  const window = 'write a divisor of 1h or 1d from 10s to 12h, such as 5m, or 1d, 1w, 1mo';
  const divides = 'does not divide an hour or a day, or is out of range';
  const duration = 'write a whole number with ms, s, m, h, d or w, such as 30s';
  const share = (shares: string) => `yardstick: { declared: { ${shares} } }`;
  const baseline = (text: string) => `yardstick: { baseline: ${text} }`;
  const cases: [string, string][] = [
    ['window: 7m', `11:13: window "7m" ${divides}; ${window}`],
    ['window: 5s', `11:13: window "5s" ${divides}; ${window}`],
    ['window: 24h', `11:13: window "24h" ${divides}; ${window}`],
    ['window: 2d', `11:13: window "2d" ${divides}; ${window}`],
    ['window: 5', `11:13: window "5" is not a window length; ${window}`],
    ['window: [5m]', '11:5: window is a list; write one text'],
    ['window:', '11:5: window is empty; write one text, or leave the key out'],
    ['windw: 5m', '11:5: "windw" is not a key here; write window'],
    ['lateness: 61d', '11:15: lateness "61d" is out of range; write a duration from 0s to 60d'],
    ['lateness: soon', `11:15: lateness "soon" is not a duration; ${duration}`],
    ['tolerance: 1', `11:16: tolerance "1" ${noUnit}`],
    ['tolerance: { moved: 0.01 }', `11:25: moved "0.01" ${noUnit}`],
    ['tolerance: 101%', '11:16: tolerance "101%" is over 100%; write a percentage from 0% to 100%'],
    ['tolerance: some', '11:16: tolerance "some" is not a percentage; write e.g. 1% or 0.5%'],
    [
      'tolerance: { each: [a] }',
      '11:18: each is a list; write a mapping from category to percentage',
    ],
    ['split: region', '11:12: split is one text; write a list, such as [ a, b ]'],
    ['split: [a, b, c, d]', '11:5: split has more than 3 fields; write up to 3'],
    ['split: [a, b, a]', '11:19: split[3] "a" is written twice; keep one'],
    [
      'split: [a..b]',
      '11:13: split[1] "a..b" is not a field path; write names joined by dots, such as a.b.c',
    ],
    [
      'zone: Mars/Base',
      '11:11: zone "Mars/Base" is not an IANA time zone; write a name such as UTC or Europe/Berlin',
    ],
    [
      'week_starts: friday',
      '11:18: week_starts "friday" is not known here; write monday or sunday',
    ],
    ['settle: 0s', '11:13: settle "0s" is out of range; write a duration from 1s to 3660d'],
    [
      'limits: { strands: 0 }',
      '11:24: strands "0" is not a whole number from 1 to 100000; write one',
    ],
    [
      'limits: { categories: many }',
      '11:27: categories "many" is not a whole number from 2 to 1000; write one',
    ],
    [
      'false_alarms: { per_week: 0 }',
      '11:31: per_week "0" is not a number above 0, up to 10000; write one',
    ],
    ['ordered: [a]', '11:5: ordered has fewer than 2 categories; write them low to high'],
    ['ordered: [a, b, a]', '11:21: ordered[3] "a" is written twice; keep one'],
    [
      'ordered: [a, (b)]',
      '11:18: ordered[2] "(b)" names "(b)", which is no made category; write \\(b)',
    ],
    [
      'where: [ { field: a } ]',
      '11:14: where[1] has no condition; write is, at_least, at_most, matches or missing',
    ],
    ['where: [ { is: a } ]', '11:14: field is missing in where[1]; write field: outcome'],
    ['where: [ { field: a, is: [] } ]', '11:26: is is empty; write at least one value'],
    ['where: [ { field: a, at_least: x } ]', '11:36: at_least "x" is not a number; write one'],
    [
      'where: [ { field: a, at_least: 3, at_most: 2 } ]',
      '11:48: at_most "2" is below at_least; write a greater number',
    ],
    [
      'where: [ { field: a, missing: true, is: b } ]',
      '11:35: missing "true" leaves nothing to compare; write it alone',
    ],
    [
      'where: [ { field: a, missing: yes } ]',
      '11:35: missing "yes" is not known here; write true or false',
    ],
    [
      'where: [ { field: a, matches: "(" } ]',
      '11:35: matches "(" is not a pattern (missing closing ): `(`); write RE2 syntax',
    ],
    [
      'where: [ { field: a, matches: "(?=a)" } ]',
      '11:35: matches "(?=a)" is not a pattern (invalid or unsupported Perl syntax: `(?=`); ' +
        'write RE2 syntax',
    ],
    [
      'yardstick: {}',
      '11:5: yardstick has no key; write one of baseline, previous, season, declared',
    ],
    [
      'yardstick: { previous: 2, season: { cycle: 1d } }',
      '11:5: yardstick has both previous and season; write one of them',
    ],
    [
      'yardstick: { previous: 97 }',
      '11:28: previous "97" is not a whole number from 1 to 96; write one',
    ],
    ['yardstick: { season: {} }', '11:18: cycle is missing in season; write cycle: 1w'],
    ['yardstick: { season: { cycle: 2d } }', '11:35: cycle "2d" is not known here; write 1d or 1w'],
    [
      'yardstick: { season: { cycle: 1d, except: [2026-02-30] } }',
      '11:48: except[1] "2026-02-30" is not a date; write one such as 2026-12-25',
    ],
    [
      baseline('{}'),
      '11:18: baseline is not one of its forms; write last, or from and to, or file',
    ],
    [
      baseline('{ last: 1d, file: x }'),
      '11:18: baseline is not one of its forms; write last, or from and to, or file',
    ],
    [
      baseline('{ from: 2026-10-01 }'),
      '11:18: baseline is not one of its forms; write last, or from and to, or file',
    ],
    [
      baseline('{ from: 2026-10-02, to: 2026-10-01 }'),
      '11:52: to "2026-10-01" is not after from; write a later time',
    ],
    [
      baseline('{ from: 2026-10-01, to: soon }'),
      '11:52: to "soon" is not a time; ' +
        'write RFC 3339, such as 2026-10-01T00:00:00Z, or a date',
    ],
    [
      baseline('{ from: "2026-10-01T00:00Z", to: "2026-10-01T00:35Z" }'),
      '11:61: to "2026-10-01T00:35Z" leaves fewer than 8 windows from from; write a later time',
    ],
    [
      baseline('{ last: 35m }'),
      '11:36: last "35m" is too short for the window (the last 35m hold fewer than 8 windows); ' +
        'write 1d',
    ],
    [
      baseline('{ file: none.csv }'),
      '11:36: file "none.csv" cannot be read (no such file); write the path of a CSV file',
    ],
    [share('a: 92%'), '11:18: declared has fewer than 2 categories; write them all'],
    [share('a: 92%, b: 6%'), '11:18: declared sums to 98%; write shares with the sum 100%'],
    [share('a: 90.0%, b: 9.8%'), '11:18: declared sums to 99.8%; write shares with the sum 100%'],
    [
      share('a: 100%, b: 0%'),
      '11:42: b "0%" is an impossible category, which is not available yet; leave it out',
    ],
    [share('a: 92%, b: 8'), `11:41: b "8" ${noUnit}`],
    [
      share('a: 92%, (b): 8%'),
      '11:18: declared names "(b)", which is no made category; write \\(b)',
    ],
    [share('00: 50%, "00": 50%'), '11:39: key "00" is written twice; keep one'],
  ];
  it.each(cases)('%s is told', (line, message) => {
    expect(inMix(line)).toContain(message);
  });
});

describe('a key of a part that is not built yet', () => {
  const later = 'is not available yet; leave it out';
  const cases: [string, string][] = [
    ['keep: { fields: [a], each: 3 }', `11:5: keep ${later}`],
    ['once_per: card', `11:5: once_per ${later}`],
    ['yardstick: { peers: all }', `11:18: peers ${later}`],
    ['false_alarms: { discovery_rate: 5% }', `11:21: discovery_rate ${later}`],
    ['creep: on', '11:12: creep "on" is not available yet; write off'],
    ['absence: alert', '11:14: absence "alert" is not available yet; write off'],
  ];
  it.each(cases)('%s in a mix is told, and nothing else', (line, message) => {
    expect(inMix(line)).toEqual([message]);
  });

  it.each(['email', 'command', 'file', 'only', 'quiet', 'provisional', 'alive'])(
    '%s in a sender is told, and nothing else',
    (key) => {
      expect(problems(file({ send: [`a: { ${key}: x }`] }))).toEqual([`13:8: ${key} ${later}`]);
    },
  );

  it.each(['push', 'syslog', 'otlp', 'sql', 'exec', 'nats', 'amqp', 'mqtt', 'kafka'])(
    'source %s is told, and nothing else',
    (key) => {
      const found = inCollector(`${key}: x`, 'decode: json', 'time: ts');
      expect(found).toEqual([`4:5: ${key} ${later}`]);
    },
  );

  it.each(['logfmt', 'csv', 'access', 'syslog'])('decode: %s is told', (decode) => {
    expect(inCollector('tail: [a]', `decode: ${decode}`, 'time: ts')).toEqual([
      `5:13: decode "${decode}" is not available yet; write json or pattern`,
    ]);
  });

  const tops: [string, string][] = [
    ['tokens: { a: b }', `1:1: tokens ${later}`],
    ['false_alarms: { discovery_rate: 5% }', `1:17: discovery_rate ${later}`],
    [
      'store: postgres://db/x',
      '1:8: store "postgres://db/x" is a PostgreSQL store, which is not available yet; ' +
        'write a file path',
    ],
    [
      'listen: 0.0.0.0:7417',
      '1:9: listen "0.0.0.0:7417" is off loopback, which needs tokens, ' +
        'which are not available yet; write 127.0.0.1 and a port',
    ],
  ];
  it.each(tops)('%s is told', (top, message) => {
    expect(problems(file({ top }))).toEqual([message]);
  });
});

describe('a collector', () => {
  const good = ['decode: json', 'time: ts'];
  const pattern = "pattern: '(?P<ts>[^ ]+) (?P<what>.*)'";
  const cases: [string[], string][] = [
    [good, '3:3: gateway has no source; write tail or stdin: true'],
    [
      ['tail: [a]', 'stdin: true', ...good],
      '3:3: gateway has both tail and stdin; write one of them',
    ],
    [['stdin: false', ...good], '4:12: stdin "false" is not known here; write true'],
    [['tail: []', ...good], '4:5: tail is empty; write at least one path'],
    [['tail: [""]', ...good], '4:12: tail[1] "" is empty; write a text or leave the key out'],
    [['tail: [a]', 'time: ts'], '3:3: decode is missing in gateway; write decode: json'],
    [['tail: [a]', 'decode: json'], '3:3: time is missing in gateway; write time: ts'],
    [
      ['tail: [a]', 'decode: jsn', 'time: ts'],
      '5:13: decode "jsn" is not known here; write json or pattern',
    ],
    [['tail: [a]', 'decode: json', 'time: {}'], '6:5: field is missing in time; write field: ts'],
    [
      ['tail: [a]', 'decode: json', 'time: { field: ts, format: syslog }'],
      '6:32: format "syslog" is not available yet; ' +
        'write iso, epoch_s, epoch_ms, epoch_us, epoch_ns or a pattern',
    ],
    [
      ['tail: [a]', 'decode: json', 'time: { field: ts, format: yyyy-MM }'],
      '6:32: format "yyyy-MM" is none of iso, epoch_s, epoch_ms, epoch_us, epoch_ns, ' +
        'and as an LDML pattern it has no d; write a year, a month and a day',
    ],
    [
      ['tail: [a]', 'decode: pattern', 'time: ts'],
      '5:13: decode "pattern" needs a pattern; ' +
        "write e.g. pattern: '(?P<ts>[^ ]+) (?P<outcome>.*)'",
    ],
    [
      ['tail: [a]', 'decode: pattern', 'pattern: a.b', 'time: ts'],
      '6:14: pattern "a.b" has no named group; write e.g. (?P<ts>[^ ]+) for each field',
    ],
    [
      ['tail: [a]', ...good, 'pattern: a'],
      '7:14: pattern "a" is not used by decode: json; leave it out',
    ],
    [
      ['tail: [a]', 'decode: pattern', pattern, 'time: tz'],
      '7:11: time "tz" is not a named group of the pattern; write one of ts, what',
    ],
    [
      ['tail: [a]', 'decode: pattern', pattern, 'time: ts'],
      '11:15: category "outcome" is not a named group of the pattern; write one of ts, what',
    ],
  ];
  it.each(cases)('%j is told', (lines, message) => {
    expect(inCollector(...lines)).toContain(message);
  });

  it('that names no collector of the file is told, with the nearest', () => {
    const text = file({}).replace('from: gateway', 'from: gatewy');
    expect(problems(text)).toEqual(['9:11: from "gatewy" is not a collector; write gateway']);
  });

  it('that reads standard input as another does is told', () => {
    const keys = ['stdin: true', 'decode: json', 'time: ts'];
    const more = ['  second: { stdin: true, decode: json, time: ts }', 'mixes:'].join('\n');
    const text = file({ collector: keys }).replace('mixes:', more);
    expect(problems(text)).toEqual([
      '7:3: second reads stdin, as gateway does; write tail, or leave one out',
    ]);
  });

  it('with a window longer than its season is told', () => {
    const lines = ['window: 1w', 'yardstick: { season: { cycle: 1d } }'];
    expect(problems(file({ mix: lines }))).toEqual([
      '12:35: cycle "1d" is shorter than the window; write a longer cycle',
    ]);
  });

  it('with a window too long for the default baseline is told at the mix', () => {
    expect(inMix('window: 1w')).toEqual([
      '8:3: outcomes is too short for the window (the last 14d hold fewer than 8 windows); ' +
        'write 56d',
    ]);
  });
});

describe('a sender', () => {
  const cases: [string, string][] = [
    ['a: {}', '13:3: webhook is missing in a; write webhook: https://example.org/hook'],
    [
      'a: { webhook: ftp://x }',
      '13:17: webhook "ftp://x" is not an address; write one that begins with https:// or http://',
    ],
    [
      'a: { webhook: "http://x", secret: "" }',
      '13:37: secret "" is empty; write a text or leave the key out',
    ],
    [
      'A b: { webhook: "http://x" }',
      '13:3: "A b" is not a name; write up to 64 of a-z, 0-9, _ and -, first a letter or digit',
    ],
  ];
  it.each(cases)('%s is told', (line, message) => {
    expect(problems(file({ send: [line] }))).toEqual([message]);
  });

  it('with a secret from the environment never shows it', () => {
    const send = ['a: { webhook: "${HOOK}" }'];
    expect(problems(file({ send }), { env: { HOOK: 'hidden' } })).toEqual([
      '13:17: webhook "${HOOK}" is not an address; ' +
        'write one that begins with https:// or http://',
    ]);
  });
});

describe('the environment', () => {
  it('without a variable is told at its place, and nothing else there', () => {
    const send = ['a: { webhook: "${HOOK}" }'];
    expect(problems(file({ send }))).toEqual([
      '13:17: environment variable HOOK is not set; set it, or write $${ for a literal',
    ]);
  });

  it.each(['"${}"', '"${A B}"', '"a${"'])('in the form %s is told', (text) => {
    expect(problems(file({ top: `store: ${text}` }))).toEqual([
      '1:8: "${" does not begin a variable; write ${NAME}, or $${ for the characters',
    ]);
  });
});

describe('a file of counts', () => {
  const cases: [string, string][] = [
    ['kind,count\n', 'has no header category,count or category,count,window; write one'],
    ['category,count\nok\n', 'line 2 has 1 fields; write 2'],
    ['category,count\n"a\nb",1\nok,x\n', 'line 4 has a count that is no whole number; write one'],
    [
      'category,count\nok,1\nok,2\n',
      'line 3 repeats a category of its window; write their sum once',
    ],
    ['category,count\nok,0\n', 'holds no events; write a category and a count a line'],
  ];
  it.each(cases)('%j is told', (text, message) => {
    const lines = ['yardstick: { baseline: { file: c.csv } }'];
    expect(problems(file({ mix: lines }), { files: { 'c.csv': text } })).toEqual([
      `11:36: file "c.csv" ${message}`,
    ]);
  });

  it('with text behind a closing quote is told as no CSV, with its line', () => {
    const lines = ['yardstick: { baseline: { file: c.csv } }'];
    const files = { 'c.csv': 'category,count\n"ok"x,1\n' };
    const [problem] = problems(file({ mix: lines }), { files });
    expect(problem).toMatch(/^11:36: file "c\.csv" is no CSV \(.* line 2 .*\); quote fields/);
  });
});
