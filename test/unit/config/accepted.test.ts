import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { config, file, mix } from './helper.js';

const documented = `store: var/tallyward.db              # SQLite file
listen: 127.0.0.1:7417
false_alarms: { per_week: 1 }
collectors:
  gateway:
    tail: [ "var/log/gateway-*.ndjson" ]
    decode: json
    time: ts                         # field path, or { field: ts, format: iso, zone: UTC }
mixes:
  gateway-outcomes:
    from: gateway
    category: outcome                # field path a.b.c
    split: [ region ]
    window: 5m
    yardstick: { baseline: { last: 14d } }
    tolerance: { moved: 1%, each: { declined: 0.5% } }
send:
  oncall: { webhook: "https://example.org/hook", secret: "\${TALLYWARD_HOOK_SECRET}" }
`;

describe('the documented example', () => {
  it('is read with its environment filled in', () => {
    const env = { TALLYWARD_HOOK_SECRET: 'a secret' };
    const read = config(documented, { env });
    expect(read).toEqual({
      file: 'c.yaml',
      text: documented,
      digest: `sha256:${createHash('sha256').update(documented).digest('hex')}`,
      store: 'var/tallyward.db',
      listen: { host: '127.0.0.1', port: 7417 },
      falseAlarms: { perWeek: 1 },
      collectors: [
        {
          name: 'gateway',
          source: { kind: 'tail', paths: ['var/log/gateway-*.ndjson'] },
          decode: { kind: 'json' },
          time: { field: ['ts'], format: { kind: 'iso' }, zone: 'UTC' },
          maxLineBytes: 1_048_576,
        },
      ],
      mixes: [
        {
          name: 'gateway-outcomes',
          from: 'gateway',
          category: ['outcome'],
          where: [],
          split: [['region']],
          window: { kind: 'sub-day', ms: 300_000 },
          zone: 'UTC',
          latenessMs: 30_000,
          yardstick: { kind: 'rolling', lastMs: 14 * 86_400_000 },
          tolerance: { moved: 0.01, each: new Map([['declined', 0.005]]) },
          ordered: null,
          limits: {
            categoriesJudged: 64,
            categoriesStored: 10_000,
            strands: 1_000,
            forgetMs: 7 * 86_400_000,
            minEvents: 20,
          },
          settleMs: null,
          falseAlarms: null,
        },
      ],
      send: [
        {
          name: 'oncall',
          webhook: 'https://example.org/hook',
          secret: 'a secret',
          freshMs: 900_000,
          digestMs: 3_600_000,
        },
      ],
      notes: [],
    });
  });
});

describe('categories', () => {
  const odd = ['00', '05', '0x10', '1.0', 'yes', 'null', '~', '1e3', '10', '9', '__proto__'];

  it('are text as written as keys of declared shares, in the order written', () => {
    const shares = odd.map((category) => `${category}: 5%`).join(', ');
    const { yardstick } = mix(`yardstick: { declared: { ${shares}, "(rest)": 45% } }`);
    const declared = yardstick.kind === 'declared' ? yardstick.shares : [];
    expect(declared.map(({ category }) => category)).toEqual([...odd, '(rest)']);
  });

  it('are text as written in ordered, each and is', () => {
    const read = mix(
      `ordered: [ ${odd.join(', ')} ]`,
      `tolerance: { each: { ${odd.map((category) => `${category}: 2%`).join(', ')} } }`,
      `where: [ { field: a, is: [ ${odd.join(', ')} ] }, { field: b, is: 00 } ]`,
    );
    expect(read.ordered).toEqual(odd);
    expect([...read.tolerance.each.keys()]).toEqual(odd);
    expect(read.where.map(({ is }) => is)).toEqual([odd, ['00']]);
  });
});

describe('declared shares', () => {
  const declared = (shares: string) => {
    const read = config(file({ mix: [`yardstick: { declared: { ${shares} } }`] }));
    const yardstick = read.mixes[0]?.yardstick;
    if (yardstick?.kind !== 'declared') throw new Error('not declared');
    return { ...yardstick, notes: read.notes };
  };

  it('with the sum 100% stay as they are', () => {
    const { shares, halfUnit, notes } = declared('a: 92%, b: 7.5%, "(rest)": 0.5%');
    expect(shares.map(({ share }) => share)).toEqual([0.92, 0.075, 0.005]);
    // Half a unit of the coarsest share: half of 1 %.
    expect(halfUnit).toBe(0.005);
    expect(notes).toEqual([]);
  });

  it('within half a last digit a share of 100% are scaled, and that is noted', () => {
    // Three thirds, each rounded to a tenth.
    const { shares, notes } = declared('a: 33.3%, b: 33.3%, c: 33.3%');
    expect(shares.map(({ share }) => share)).toEqual([1 / 3, 1 / 3, 1 / 3]);
    expect(notes).toEqual([
      'mix outcomes: the declared shares sum to 99.9% and are scaled to 100%',
    ]);
  });

  it('just at half a last digit a share are scaled still', () => {
    expect(declared('a: 50%, b: 51%').notes).toHaveLength(1);
  });
});

describe('what may be written in more than one way', () => {
  const collector = (...lines: string[]) => config(file({ collector: lines })).collectors[0];
  const at = (name: string) => ({ decode: `decode: ${name}` });

  it('one path is a list of one', () => {
    const read = collector('tail: a.log', at('json').decode, 'time: ts');
    expect(read?.source).toEqual({ kind: 'tail', paths: ['a.log'] });
  });

  it('standard input is a source', () => {
    const read = collector('stdin: true', at('json').decode, 'time: a.ts');
    expect(read?.source).toEqual({ kind: 'stdin' });
    expect(read?.time.field).toEqual(['a', 'ts']);
  });

  const formats: [string, unknown][] = [
    ['iso', { kind: 'iso' }],
    ['epoch_s', { kind: 'epoch', unit: 's' }],
    ['epoch_ms', { kind: 'epoch', unit: 'ms' }],
    ['epoch_us', { kind: 'epoch', unit: 'us' }],
    ['epoch_ns', { kind: 'epoch', unit: 'ns' }],
    ['dd/MMM/yyyy', { kind: 'ldml', pattern: 'dd/MMM/yyyy' }],
  ];
  it.each(formats)('time format %s', (format, expected) => {
    const time = `time: { field: ts, format: ${format}, zone: Europe/Berlin }`;
    const read = collector('tail: [a]', at('json').decode, time);
    expect(read?.time).toEqual({ field: ['ts'], format: expected, zone: 'Europe/Berlin' });
  });

  it('tolerance as one percentage is that of what moved', () => {
    expect(mix('tolerance: 0.7%').tolerance).toEqual({ moved: 0.007, each: new Map() });
  });

  const windows: [string, unknown][] = [
    ['10s', { kind: 'sub-day', ms: 10_000 }],
    ['60m', { kind: 'sub-day', ms: 3_600_000 }],
    ['12h', { kind: 'sub-day', ms: 43_200_000 }],
    ['1d', { kind: 'day' }],
  ];
  it.each(windows)('window %s', (text, expected) => {
    expect(mix(`window: ${text}`).window).toEqual(expected);
  });

  it('windows of a week and a month', () => {
    const season = 'yardstick: { previous: 2 }';
    expect(mix('window: 1w', 'week_starts: sunday', season).window).toEqual({
      kind: 'week',
      weekStarts: 'sunday',
    });
    expect(mix('window: 1mo', season).window).toEqual({ kind: 'month' });
  });

  const yardsticks: [string, unknown][] = [
    ['{ previous: 3 }', { kind: 'previous', windows: 3 }],
    [
      '{ season: { cycle: 1w, except: [2026-12-25] } }',
      { kind: 'season', cycle: 'week', keep: 4, except: ['2026-12-25'] },
    ],
    ['{ baseline: { last: 40m } }', { kind: 'rolling', lastMs: 2_400_000 }],
    [
      '{ baseline: { from: 2026-10-01, to: "2026-10-15T00:00:00Z" } }',
      {
        kind: 'pinned',
        fromMs: Date.parse('2026-10-01T00:00:00Z'),
        toMs: Date.parse('2026-10-15T00:00:00Z'),
      },
    ],
  ];
  it.each(yardsticks)('yardstick %s', (text, expected) => {
    expect(mix(`yardstick: ${text}`).yardstick).toEqual(expected);
  });

  it('dates of a pinned baseline are midnights in the zone of the mix', () => {
    const lines = [
      'zone: Asia/Kathmandu',
      'yardstick: { baseline: { from: 2026-10-01, to: 2026-10-15 } }',
    ];
    // Kathmandu is 5:45 ahead (IANA time zone database, from memory).
    expect(mix(...lines).yardstick).toMatchObject({ fromMs: Date.parse('2026-09-30T18:15:00Z') });
  });
});

describe('other settings', () => {
  it('reach the mix', () => {
    const read = mix(
      'where: [ { field: a.b, at_least: -1.5, at_most: 2 }, { field: c, missing: false } ]',
      'limits: { categories: 10, strands: 5, forget: 1h, min_events: 50 }',
      ...['settle: 2d', 'lateness: 60d', 'false_alarms: { per_week: 0.5 }', 'creep: off'],
    );
    const none = { is: null, atLeast: null, atMost: null, matches: null, missing: null };
    expect(read.where).toEqual([
      { ...none, field: ['a', 'b'], atLeast: -1.5, atMost: 2 },
      { ...none, field: ['c'], missing: false },
    ]);
    expect(read.settleMs).toBe(2 * 86_400_000);
    expect(read.latenessMs).toBe(60 * 86_400_000);
    expect(read.falseAlarms).toEqual({ perWeek: 0.5 });
  });

  it('let no strand be forgotten before 24 windows', () => {
    expect(mix('limits: { forget: 1h }').limits.forgetMs).toBe(24 * 300_000);
    expect(mix('limits: { forget: 3h }').limits.forgetMs).toBe(3 * 3_600_000);
  });

  it.each(['[::1]:80', 'localhost:0', '127.9.0.1:65535'])('listen on %s', (listen) => {
    expect(config(file({ top: `listen: "${listen}"` })).listen.port).toBeLessThan(65_536);
  });
});

describe('the environment', () => {
  it('is filled in once, and $${ is a literal', () => {
    const top = 'store: "${DIR}/$${X}-${EMPTY}.db"';
    const env = { DIR: '${NOT_AGAIN}', EMPTY: '' };
    expect(config(file({ top }), { env }).store).toBe('${NOT_AGAIN}/${X}-.db');
  });
});

describe('aliases', () => {
  it('stand for what they name', () => {
    const top = 'false_alarms: &budget { per_week: 2 }';
    const read = config(file({ top, mix: ['false_alarms: *budget'] }));
    expect(read.mixes[0]?.falseAlarms).toEqual({ perWeek: 2 });
  });
});

describe('a file of counts', () => {
  const yardstick = (text: string) =>
    config(file({ mix: ['yardstick: { baseline: { file: counts.csv } }'] }), {
      files: { 'counts.csv': text },
    }).mixes[0]?.yardstick;

  it('without windows is one map', () => {
    expect(yardstick('category,count\r\nok,90\r\n"a ""b"", c",10\r\n')).toEqual({
      kind: 'file',
      path: 'counts.csv',
      windows: [
        new Map([
          ['ok', 90],
          ['a "b", c', 10],
        ]),
      ],
      windowed: false,
    });
  });

  it('with windows is one map a window, in the order named', () => {
    const text = 'category,count,window\nok,9,w2\nok,8,w1\n\nno,1,w2';
    expect(yardstick(text)).toMatchObject({
      windows: [
        new Map([
          ['ok', 9],
          ['no', 1],
        ]),
        new Map([['ok', 8]]),
      ],
      windowed: true,
    });
  });
});
