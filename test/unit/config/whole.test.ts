import { describe, expect, it } from 'vitest';
import { formatProblem } from '../../../src/config/problems.js';
import { file, problems } from './helper.js';

describe('a file', () => {
  it('with many things wrong has all of them told in one run, in order of place', () => {
    const text = `stor: x
listen: 7417
collectors:
  gateway:
    tail: [a]
    decode: csv
    time: { field: ts, zone: Nowhere }
  other: { stdin: true, decode: json, time: ts, decode: json }
mixes:
  outcomes:
    from: gatewy
    category: a..b
    window: 7m
    yardstick: { declared: { a: 92%, b: 8 }, previous: 3 }
    split: [ "\${NOPE}" ]
send:
  a: { webhok: "http://x" }
  b:
`;
    expect(problems(text).map((line) => line.split(' ').slice(0, 2).join(' '))).toEqual([
      ...['1:1: "stor"', '2:9: listen', '6:13: decode', '7:30: zone', '8:49: key'],
      ...['11:11: from', '12:15: category', '13:13: window', '14:41: b', '15:14: environment'],
      ...['17:3: webhook', '17:8: "webhok"', '18:3: b'],
    ]);
  });

  const shapes: [string, string, string[]][] = [
    ['that is empty', '', ['1:1: the file is empty; write collectors and mixes']],
    ['of comments alone', '# a\n', ['1:1: the file is empty; write collectors and mixes']],
    [
      'that is a list',
      '- a\n',
      ['1:1: the file is not a mapping; write keys such as collectors: and mixes:'],
    ],
    [
      'without collectors and mixes',
      'store: x\n',
      [
        '1:1: collectors is missing; write collectors: with at least one',
        '1:1: mixes is missing; write mixes: with at least one',
      ],
    ],
    [
      'with empty sections',
      'collectors: {}\nmixes:\n',
      [
        '1:1: collectors has no named section; write a name and its keys under it',
        '2:1: mixes has no named section; write a name and its keys under it',
      ],
    ],
    [
      'over 1 MiB',
      `# ${'x'.repeat(1_048_576)}`,
      ['1:1: the file is over 1 MiB; write a smaller one'],
    ],
    [
      'nested without end',
      '['.repeat(100_000),
      [expect.stringMatching(/nested more than 16 levels deep; write it flatter$/) as string],
    ],
  ];
  it.each(shapes)('%s is told', (_, text, messages) => {
    expect(problems(text)).toEqual(messages);
  });

  const broken: [string, string, RegExp][] = [
    [
      'a bracket that does not close',
      'a: [1\nb: 2\n',
      /^\d+:\d+: not valid YAML: .*; correct it here$/,
    ],
    ['a tab as indentation', 'a:\n\tb: 1\n', /^2:1: not valid YAML: Tabs .*; correct it here$/],
    ['a second document', 'a: 1\n---\nb: 2\n', /^2:1: a second document begins; write one$/],
    ['an unknown tag', 'store: !mine x\n', /^1:8: not valid YAML: Unresolved tag: !mine; correct/],
    [
      'an alias for nothing',
      'store: *none\n',
      /^1:8: alias \*none names nothing; write the value, or &none before$/,
    ],
    ['a key that is a list', '? [a]\n: b\n', /^1:3: a key must be plain text; write name: value$/],
    ['an alias inside itself', 'store: &a [ *a ]\n', /levels deep; write it flatter$/],
  ];
  it.each(broken)('with %s is told at its place', (_, text, message) => {
    expect(problems(text)).toContainEqual(expect.stringMatching(message));
  });

  it('with more than 32 aliases is told', () => {
    const aliases = Array.from({ length: 33 }, () => '*a').join(', ');
    const text = file({ top: 'store: &a x', mix: [`ordered: [ ${aliases} ]`] });
    expect(problems(text)).toContainEqual(
      expect.stringMatching(/^11:\d+: more than 32 aliases; write the values out$/),
    );
  });

  it('with aliases of aliases stays bounded', () => {
    const levels = Array.from({ length: 9 }, (_, at) => {
      const inner = at === 0 ? 'x' : `*l${at - 1}`;
      return `  - &l${at} [ ${Array.from({ length: 9 }, () => inner).join(', ')} ]`;
    });
    expect(problems(`store:\n${levels.join('\n')}\n`).length).toBeGreaterThan(0);
  });
});

describe('a problem', () => {
  it('is one line: file, line, column, what and what to write', () => {
    const problem = { line: 3, column: 7, message: 'a is wrong; write b' };
    expect(formatProblem('conf/x.yaml', problem)).toBe('conf/x.yaml:3:7: a is wrong; write b');
  });

  it('shows long and odd text shortened and on one line', () => {
    const [message = ''] = problems(file({ top: `listen: "a\\n${'x'.repeat(100)}"` }));
    expect(message).toContain(`listen "a\\n${'x'.repeat(55)}..." is not an address and port`);
  });
});
