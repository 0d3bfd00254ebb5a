import { describe, expect } from 'vitest';
import { Chance, line, type Shares } from './logs.js';
import { it, type Place } from './program.js';

const startMs = Date.UTC(2026, 3, 6, 8);
const shares: Shares = [
  ['boarded', 0.9],
  ['=missed', 0.07],
  ['refunded, late', 0.03],
];

const configuration = `store: var/ferries.db
listen: 127.0.0.1:0
collectors:
  ferries: { tail: logs/ferries.ndjson, decode: json, time: ts }
mixes:
  tickets:
    from: ferries
    category: ticket
    split: [pier]
    window: 1m
    yardstick: { baseline: { last: 1h } }
  piers:
    from: ferries
    category: pier
    window: 5m
`;

/** Half an hour of tickets at two piers, without trouble. */
function ferries(): string {
  const chance = new Chance(3);
  return chance
    .instants(3_000, startMs, 30 * 60_000)
    .map((atMs) =>
      line(atMs, {
        pier: chance.pick([
          ['east', 0.5],
          ['west', 0.5],
        ]),
        ticket: chance.pick(shares),
      }),
    )
    .join('');
}

function prepare(place: Place): void {
  place.write('watch.yaml', configuration);
  place.write('logs/ferries.ndjson', ferries());
}

const config = ['--config', 'watch.yaml'];

interface Row {
  readonly mix: string;
  readonly strand: Readonly<Record<string, string>>;
  readonly start: string;
  readonly end: string;
  readonly category: string;
  readonly count: number;
  readonly late: number;
}

async function rowsOf(place: Place, ...options: readonly string[]): Promise<readonly Row[]> {
  const found = await place.json(['tallies', ...config, ...options]);
  return (found as { readonly tallies: readonly Row[] }).tallies;
}

const sum = (rows: readonly Row[]): number => rows.reduce((total, { count }) => total + count, 0);

// First, because it takes a minute of real time in which the others can run.
describe.concurrent('demo', () => {
  it(
    'when a depot begins to damage parcels, raises for it and not for the one that is only busier',
    { timeout: 120_000 },
    async ({ place }) => {
      const { status, stdout } = await place.run(['demo', '--seconds', '65'], { limitMs: 100_000 });
      expect(status).toBe(0);
      expect(stdout).toContain('Saltmere Parcels');
      const raised = stdout.match(/^raised .*$/gm) ?? [];
      expect(raised.some((text) => text.includes('depot=saltmarsh'))).toBe(true);
      expect(raised.filter((text) => text.includes('depot=highmoor'))).toEqual([]);
      const begins = stdout.indexOf('(from now on saltmarsh damages more parcels');
      expect(begins).toBeGreaterThan(0);
      expect(stdout.indexOf('raised ')).toBeGreaterThan(begins);
    },
  );
});

describe.concurrent('check', { timeout: 60_000 }, () => {
  it('when a configuration is right, says in words what it will do and exits 0', async ({
    place,
  }) => {
    prepare(place);
    const { status, stdout, stderr } = await place.run(['check', ...config]);
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout).toMatch(/tickets: ticket of ferries, split by pier, windows of 1m/);
    // 10,080 minutes and 2,016 times five minutes a week.
    expect(stdout).toMatch(/10,080 rounds a week/);
    expect(stdout).toMatch(/2,016 rounds a week/);
    expect(stdout).toMatch(/false alarms to expect in a quiet week: \d/);
  });

  it('when much is wrong, tells all of it at its place in one run and exits 2', async ({
    place,
  }) => {
    const text = [
      'store: var/ferries.db',
      'collectors:',
      '  ferries: { tail: logs/ferries.ndjson, decode: jason, time: ts }',
      'mixes:',
      '  tickets:',
      '    from: fairies',
      '    category: ticket',
      '    window: 7m',
      '    tolerence: 1%',
      'send:',
      '  oncall: { webhook: "http://127.0.0.1:1/", secret: "${NOT_SET_HERE}" }',
    ];
    place.write('wrong.yaml', text.join('\n'));
    const { status, stdout, stderr } = await place.run(['check', '--config', 'wrong.yaml']);
    expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    // Each problem is told where its text begins: line and column from 1.
    const wrong = ['jason', 'fairies', '7m', 'tolerence', '"${NOT_SET_HERE}"'];
    const places = wrong.map((word) => {
      const row = text.findIndex((one) => one.includes(word));
      return `wrong.yaml:${row + 1}:${text[row].indexOf(word) + 1}`;
    });
    const lines = stderr.trim().split('\n');
    expect(lines.map((one) => /^[^:]+:\d+:\d+(?=: .+; .+$)/.exec(one)?.[0])).toEqual(places);
    const words = ['jason', 'fairies', '7m', 'tolerance', 'NOT_SET_HERE'];
    words.forEach((word, at) => expect(lines[at]).toContain(word));
  });

  it.for(['check', 'start', 'rehearse', 'tallies', 'verdicts'])(
    'when the configuration is not there, %s names it and exits 2',
    async (command, { place }) => {
      const { status, stderr } = await place.run([command, '--config', 'nowhere.yaml']);
      expect(status).toBe(2);
      expect(stderr).toMatch(/^nowhere\.yaml: cannot be read .*; give the path of a file\n$/);
    },
  );
});

describe.concurrent('wrong usage', { timeout: 60_000 }, () => {
  it.for([
    ['a command that does not exist', ['watch'], /unknown command 'watch'/],
    ['a command without its configuration', ['start'], /required option '--config <file>'/],
    ['an option that does not exist', ['check', ...config, '--loud'], /unknown option '--loud'/],
    [
      'a time that is none',
      ['tallies', ...config, '--from', 'noon'],
      /--from noon: not a time; write/,
    ],
    [
      'a mix that does not exist',
      ['tallies', ...config, '--mix', 'boats'],
      /--mix boats: no such mix; there is/,
    ],
    ['a demo of no seconds', ['demo', '--seconds', '0'], /--seconds 0: write a whole number/],
  ] as const)(
    'when given %s, exits 2 with what to write and no trace',
    async ([, args, says], { place }) => {
      prepare(place);
      const { status, stdout, stderr } = await place.run(args);
      expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
      expect(stderr).toMatch(says);
      expect(stderr).not.toMatch(/^ +at /m);
    },
  );

  it('when asked for help or the version, prints it and exits 0', async ({ place }) => {
    expect(await place.output(['--version'])).toMatch(/^\d+\.\d+\.\d+\n$/);
    const help = await place.output(['--help']);
    for (const command of ['start', 'check', 'weigh', 'rehearse', 'tallies', 'verdicts', 'demo']) {
      expect(help).toMatch(new RegExp(`^  ${command} `, 'm'));
    }
  });

  it('when the store has not been made yet, tallies says so and exits 3', async ({ place }) => {
    prepare(place);
    const { status, stderr } = await place.run(['tallies', ...config]);
    expect(status).toBe(3);
    expect(stderr).toContain('var/ferries.db');
    expect(stderr).not.toMatch(/^ +at /m);
  });
});

describe.concurrent('tallies', { timeout: 60_000 }, () => {
  it('when all is counted, lists each event once, a split mix by its strands', async ({
    place,
  }) => {
    prepare(place);
    await place.output(['start', ...config, '--once']);
    const rows = await rowsOf(place);
    const tickets = rows.filter(({ mix }) => mix === 'tickets');
    const piers = rows.filter(({ mix }) => mix === 'piers');
    expect(sum(tickets)).toBe(3_000);
    expect(sum(piers)).toBe(3_000);
    expect(new Set(tickets.map(({ strand }) => strand['pier']))).toEqual(new Set(['east', 'west']));
    expect(new Set(piers.map(({ strand }) => JSON.stringify(strand)))).toEqual(new Set(['{}']));
    expect(await rowsOf(place, '--mix', 'piers')).toEqual(piers);

    const span = ['--from', '2026-04-06T08:10:00Z', '--to', '2026-04-06T08:20:00Z'];
    const inside = rows.filter(({ start, end }) => start >= span[1] && end <= span[3]);
    expect(await rowsOf(place, ...span)).toEqual(inside);
    expect(inside.length).toBeGreaterThan(30);
  });

  it('when printed as CSV, quotes what needs it and defuses formulas', async ({ place }) => {
    prepare(place);
    await place.output(['start', ...config, '--once']);
    const csv = await place.output(['tallies', ...config, '--mix', 'tickets', '--csv']);
    const [head, ...lines] = csv.trimEnd().split('\n');
    expect(head).toBe('mix,strand,start,end,category,count,late');
    expect(lines).toHaveLength((await rowsOf(place, '--mix', 'tickets')).length);
    expect(lines.some((text) => text.includes(`,"refunded, late",`))).toBe(true);
    expect(lines.some((text) => text.includes(",'=missed,"))).toBe(true);
    expect(lines.some((text) => text.includes(',=missed,'))).toBe(false);
  });
});

describe.concurrent('a running daemon', { timeout: 60_000 }, () => {
  it('when it runs, answers on its port, lets tallies be read, and stops in order', async ({
    place,
  }) => {
    prepare(place);
    const daemon = place.launch(['start', ...config]);
    const [, address] = await daemon.waitFor(/metrics at (http:\/\/127\.0\.0\.1:\d+)\/metrics/);
    const live = await fetch(`${address}/health/live`);
    expect([live.status, await live.json()]).toEqual([200, { live: true }]);
    await expect
      .poll(async () => (await fetch(`${address}/health/ready`)).status, { timeout: 10_000 })
      .toBe(200);
    const metrics = await (await fetch(`${address}/metrics`)).text();
    expect(metrics).toMatch(/^tallyward_events_total\{mix="tickets"\} 3000$/m);
    expect(metrics).toMatch(/^tallyward_collector_lag_bytes\{collector="ferries"\} 0$/m);
    expect((await fetch(`${address}/nowhere`)).status).toBe(404);
    expect(sum(await rowsOf(place, '--mix', 'tickets'))).toBe(3_000);

    place.append(
      'logs/ferries.ndjson',
      line(startMs + 1_799_999, { pier: 'east', ticket: 'boarded' }),
    );
    await expect
      .poll(async () => sum(await rowsOf(place, '--mix', 'tickets')), { timeout: 10_000 })
      .toBe(3_001);
    const { status, stdout, stderr } = await daemon.stop('SIGTERM');
    expect({ status, stderr }).toEqual({ status: 0, stderr: '' });
    expect(stdout.trimEnd().split('\n').at(-1)).toBe('stopping');
  });

  it.for([
    ['start', []],
    ['start --once', ['--once']],
  ] as const)('when one counts into a store already, refuses %s', async ([, more], { place }) => {
    prepare(place);
    const daemon = place.launch(['start', ...config]);
    await daemon.waitFor(/metrics at/);
    const { status, stderr } = await place.run(['start', ...config, ...more]);
    expect(status).toBe(3);
    expect(stderr).toMatch(/^var\/ferries\.db: another tallyward is already counting .*; stop it/);
    await daemon.stop('SIGTERM');
    // Once it has stopped, the store is free again.
    await place.output(['start', ...config, '--once']);
  });

  it('when its port is taken, says which and what to do, and exits 3', async ({ place }) => {
    prepare(place);
    const daemon = place.launch(['start', ...config]);
    const [, port] = await daemon.waitFor(/metrics at http:\/\/127\.0\.0\.1:(\d+)\//);
    const other = configuration.replace(':0\n', `:${port}\n`).replace('ferries.db', 'other.db');
    place.write('other.yaml', other);
    const { status, stderr } = await place.run(['start', '--config', 'other.yaml']);
    expect(status).toBe(3);
    expect(stderr).toMatch(new RegExp(`listen: 127\\.0\\.0\\.1:${port} is taken .*; set another`));
  });
});
