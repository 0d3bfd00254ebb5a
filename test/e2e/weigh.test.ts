import { describe, expect } from 'vitest';
import { Chance, line } from './logs.js';
import { it, type Place } from './program.js';
import { check, checks, expectPublished, samplesOf } from './published.js';

/** What `weigh --json` prints, as far as it is looked at here. */
interface Weighed {
  readonly method: string;
  readonly statistic: number | null;
  readonly df: number | null;
  readonly df2?: number | null;
  readonly p: number;
  readonly rho?: number;
  readonly pearson: { readonly statistic: number; readonly df: number; readonly p: number };
  readonly g2: { readonly statistic: number; readonly df: number; readonly p: number };
  readonly table: { readonly categories: readonly string[]; readonly observed: number[][] };
  readonly pooled: readonly string[];
}

/** A value of ours, and the source's text of it. */
type Reading = readonly [ours: (found: Weighed) => number, key: string];

const pearson: Reading['0'] = (found) => found.pearson.statistic;
const pearsonP: Reading['0'] = (found) => found.pearson.p;
const g2: Reading['0'] = (found) => found.g2.statistic;

/** Every published 2 x K or K x 2 table with a Pearson or G2 value. */
const tables: readonly (readonly [id: string, readings: readonly Reading[]])[] = [
  [
    'agresti-2007-party',
    [
      [pearson, 'statistic'],
      [(found) => found.pearson.df, 'df'],
      [pearsonP, 'p'],
    ],
  ],
  [
    'r-2x2-yates',
    [
      [pearson, 'statistic_uncorrected'],
      [pearsonP, 'p_uncorrected'],
    ],
  ],
  [
    'davis-1986',
    [
      [pearson, 'X2'],
      [pearsonP, 'p_asymptotic'],
    ],
  ],
  ['agresti-laryngeal', [[pearson, 'X2']]],
  [
    'cochran-1954',
    [
      [pearson, 'X2'],
      [(found) => found.pearson.df, 'df'],
      [pearsonP, 'p'],
    ],
  ],
  ['armitage-1955', [[pearson, 'X2']]],
  [
    'armfold-repeated-g',
    [
      [g2, 'heterogeneity_G'],
      [(found) => found.g2.df, 'heterogeneity_df'],
      [(found) => found.g2.p, 'heterogeneity_p'],
    ],
  ],
  [
    'clustered-rats',
    [
      [pearson, 'naive_X2'],
      [pearsonP, 'naive_p'],
    ],
  ],
];

const fits: typeof tables = [
  [
    'r-gof-equal',
    [
      [pearson, 'statistic'],
      [pearsonP, 'p'],
    ],
  ],
  [
    'r-gof-unequal',
    [
      [pearson, 'statistic'],
      [pearsonP, 'p'],
    ],
  ],
  [
    'r-gof-small-expected',
    [
      [pearson, 'statistic'],
      [pearsonP, 'p'],
    ],
  ],
  [
    'mendel-peas',
    [
      [pearson, 'X2'],
      [pearsonP, 'X2_p'],
      [g2, 'G2'],
    ],
  ],
];

function csv(counts: readonly number[]): string {
  return `category,count\n${counts.map((n, at) => `c${at},${n}\n`).join('')}`;
}

/** Writes both samples as CSV and weighs them. */
async function weigh(
  place: Place,
  [before, after]: readonly [readonly number[], readonly number[]],
  ...options: readonly string[]
): Promise<Weighed> {
  place.write('before.csv', csv(before));
  place.write('after.csv', csv(after));
  return (await place.json(['weigh', 'before.csv', 'after.csv', ...options])) as Weighed;
}

const party = samplesOf(check('agresti-2007-party'));

describe.concurrent('weigh on published tables', () => {
  it.for(tables)(
    'when given %s as CSV, prints its published values',
    async ([id, readings], { place }) => {
      const found = await weigh(place, samplesOf(check(id)), '--no-pooling');
      expect(found.method).toBe('pearson');
      for (const [ours, key] of readings) expectPublished(ours(found), check(id), key);
    },
  );

  it.for(fits)(
    'when given %s as declared shares, prints its published fit',
    async ([id, readings], { place }) => {
      const { inputs } = check(id);
      const counts = inputs['observed'] as number[];
      const shares = (inputs['probabilities'] ??
        inputs['ratio'] ??
        counts.map(() => 1)) as number[];
      const found = await weigh(place, [shares, counts], '--declared', '--no-pooling');
      expect(found.method).toBe('goodness-of-fit');
      for (const [ours, key] of readings) expectPublished(ours(found), check(id), key);
    },
  );

  it('when a table or fit with such a value is published, has it in the lists above', () => {
    const listed = [...tables, ...fits].map(([id]) => id).sort();
    const withValue = checks.filter(({ computed }) => {
      const keys = Object.keys(computed);
      return keys.some((key) => /^(statistic|X2|G2|naive_X2|heterogeneity_G)/.test(key));
    });
    expect(withValue.map(({ id }) => id).sort()).toEqual(listed);
  });

  it.for(['davis-1986', 'agresti-laryngeal'])(
    'when --exact is asked for %s, prints the published exact p',
    async (id, { place }) => {
      const found = await weigh(place, samplesOf(check(id)), '--exact');
      expect(found.method).toBe('exact');
      expect(found.statistic).toBeNull();
      expectPublished(found.p, check(id), 'fisher_p');
    },
  );

  it('when one count of a published table is changed, the printed digits no longer hold', async ({
    place,
  }) => {
    const [before, after] = party;
    const found = await weigh(place, [[before[0] + 1, ...before.slice(1)], after], '--no-pooling');
    expect(() =>
      expectPublished(pearson(found), check('agresti-2007-party'), 'statistic'),
    ).toThrow();
  });
});

describe.concurrent('weigh --monte-carlo', () => {
  it('when the seed is the same, prints the same bytes, and comes near the exact p', async ({
    place,
  }) => {
    const { computed } = check('r-2x2-yates');
    const samples = samplesOf(check('r-2x2-yates'));
    const found = await weigh(place, samples, '--monte-carlo', '40000', '--seed', '11');
    const again = await weigh(place, samples, '--monte-carlo', '40000', '--seed', '11');
    const other = await weigh(place, samples, '--monte-carlo', '40000', '--seed', '12');
    expect(again).toEqual(found);
    expect(other.p).not.toBe(found.p);
    expect(found.method).toBe('monte-carlo');
    // Five standard errors of a share of 40,000 sampled tables.
    const limit = Number(computed['mc_limit_exact_conditional_p']);
    expect(Math.abs(found.p - limit)).toBeLessThan(5 * Math.sqrt((limit * (1 - limit)) / 40_000));
  });
});

describe.concurrent('exit status of weigh', () => {
  it('when --fail-on-shift is above p, is 1, and the comparison is printed all the same', async ({
    place,
  }) => {
    place.write('before.csv', csv(party[0]));
    place.write('after.csv', csv(party[1]));
    const command = ['weigh', 'before.csv', 'after.csv', '--json'];
    // p of this table is printed as 2.954e-07 in its source.
    const plain = await place.run(command);
    const above = await place.run([...command, '--fail-on-shift', '3e-7']);
    const below = await place.run([...command, '--fail-on-shift', '2.9e-7']);
    expect([plain.status, above.status, below.status]).toEqual([0, 1, 0]);
    expect(above.stdout).toBe(plain.stdout);
  });

  it('when a person asks, answers in words with the share that moved', async ({ place }) => {
    place.write('before.csv', csv(party[0]));
    place.write('after.csv', csv(party[1]));
    const text = await place.output(['weigh', 'before.csv', 'after.csv']);
    // Shares of c2: 468 of 1557 and 477 of 1200.
    expect(text).toMatch(/c2: 30\.1 % before, 39\.8 % after/);
    expect(text).toContain('p = 2.954e-7');
  });
});

const shares = [
  ['accepted', 0.7],
  ['returned', 0.2],
  ['lost', 0.1],
] as const;
const hourMs = 3_600_000;
const startMs = Date.UTC(2026, 8, 7);

/** A log of `hours` windows with exactly these counts an hour. */
function hourly(hours: readonly (readonly number[])[], fromMs = startMs): string {
  const lines = hours.flatMap((counts, hour) =>
    counts.flatMap((n, at) =>
      Array.from({ length: n }, (_, i) =>
        line(fromMs + hour * hourMs + i * 1000, { parcel: { outcome: shares[at][0] } }),
      ),
    ),
  );
  return lines.join('');
}

const log = ['--category', 'parcel.outcome'];
const windows = [...log, '--time', 'ts', '--window', '1h'];

describe.concurrent('weigh on logs', () => {
  it('when the samples are logs, counts their category as a CSV of the same counts', async ({
    place,
  }) => {
    place.write(
      'before.ndjson',
      hourly([
        [70, 20, 10],
        [60, 25, 15],
      ]),
    );
    place.write('after.ndjson', hourly([[50, 30, 20]], startMs + 10 * hourMs));
    const fromLogs = await place.json(['weigh', 'before.ndjson', 'after.ndjson', ...log]);
    place.write('before.csv', 'accepted,130\nreturned,45\nlost,25\n');
    place.write('after.csv', 'category,count\naccepted,50\nreturned,30\nlost,20\n');
    expect(await place.json(['weigh', 'before.csv', 'after.csv'])).toEqual(fromLogs);
  });

  it('when a record has no such field or is no JSON, says what it did with it', async ({
    place,
  }) => {
    place.write(
      'before.ndjson',
      `${hourly([[70, 20, 10]])}not json\n${line(startMs, { other: 1 })}`,
    );
    place.write('after.ndjson', hourly([[50, 30, 20]]));
    const { stdout, stderr } = await place.run([
      'weigh',
      'before.ndjson',
      'after.ndjson',
      ...log,
      '--no-pooling',
      '--json',
    ]);
    expect(stderr).toBe('before.ndjson: 1 records could not be counted\n');
    const { table } = JSON.parse(stdout) as Weighed;
    expect(table.categories).toEqual(['(missing)', 'accepted', 'lost', 'returned']);
    expect(table.observed[0]).toEqual([1, 70, 10, 20]);
  });

  it('when windows of BEFORE do not vary at all, F is the G2 of the table by its degrees', async ({
    place,
  }) => {
    place.write('before.ndjson', hourly(Array.from({ length: 12 }, () => [70, 20, 10])));
    place.write('after.ndjson', hourly([[50, 30, 20]], startMs + 20 * hourMs));
    const found = (await place.json([
      'weigh',
      'before.ndjson',
      'after.ndjson',
      ...windows,
    ])) as Weighed;
    // Quasi-likelihood F (McCullagh and Nelder 1989): F = G2 / (K - 1) where the dispersion is 1.
    expect(found.method).toBe('g2-f');
    expect(found.rho).toBe(0);
    expect(Math.abs((found.statistic ?? NaN) * 2 - found.g2.statistic)).toBeLessThan(1e-9);
    expect(found.df2).toBeLessThanOrEqual(11 * 2);
  });

  it('when windows of BEFORE vary by themselves, takes that for no shift', async ({ place }) => {
    const chance = new Chance(5);
    const hours = Array.from({ length: 24 }, () => {
      const lost = chance.whole(2, 60);
      return [150 - lost, 40, lost + 10];
    });
    place.write('before.ndjson', hourly(hours));
    place.write('after.ndjson', hourly([[95, 40, 65]], startMs + 30 * hourMs));
    const plain = (await place.json(['weigh', 'before.ndjson', 'after.ndjson', ...log])) as Weighed;
    const found = (await place.json([
      'weigh',
      'before.ndjson',
      'after.ndjson',
      ...windows,
    ])) as Weighed;
    expect(plain.p).toBeLessThan(1e-3);
    expect(found.method).toBe('g2-f');
    expect(found.rho).toBeGreaterThan(0);
    expect(found.p).toBeGreaterThan(0.01);
    expect(found.pearson).toEqual(plain.pearson);
  });
});

const usage: readonly (readonly [what: string, args: readonly string[], says: RegExp])[] = [
  ['one sample is missing', ['before.csv'], /missing required argument 'after'/],
  ['a file is not there', ['before.csv', 'nowhere.csv'], /^nowhere\.csv: cannot be read .*; give/m],
  ['a file is a folder', ['before.csv', '.'], /^\.: cannot be read .*; give/m],
  ['a log is given without its field', ['log.ndjson', 'after.csv'], /^log\.ndjson: .*--category/m],
  [
    'an option does not exist',
    ['before.csv', 'after.csv', '--prior', '1'],
    /unknown option '--prior'/,
  ],
  [
    'two ways to p are asked for',
    ['before.csv', 'after.csv', '--exact', '--monte-carlo', '999'],
    /exclude each other; give one/,
  ],
  [
    'sampled tables are asked for against declared shares',
    ['before.csv', 'after.csv', '--declared', '--monte-carlo', '999', '--seed', '1'],
    /needs two samples; leave out --declared/,
  ],
  [
    'an exact p is asked for with windows',
    ['log.ndjson', 'log.ndjson', ...windows, '--exact'],
    /--window does not; give one/,
  ],
  [
    'windows are asked for of counts',
    ['before.csv', 'after.csv', '--time', 'ts', '--window', '1h'],
    /--window needs logs/,
  ],
  [
    'sampling has no seed',
    ['before.csv', 'after.csv', '--monte-carlo', '999'],
    /--monte-carlo needs --seed/,
  ],
  [
    'the seed is no number',
    ['before.csv', 'after.csv', '--monte-carlo', '999', '--seed', 'x'],
    /--seed x: write a whole number/,
  ],
  [
    'the probability is none',
    ['before.csv', 'after.csv', '--fail-on-shift', '2'],
    /--fail-on-shift 2: write a probability/,
  ],
  [
    'the decoder is unknown',
    ['log.ndjson', 'log.ndjson', ...log, '--decode', 'xml'],
    /--decode xml: only json/,
  ],
  [
    'the window does not divide a day',
    ['log.ndjson', 'log.ndjson', ...log, '--time', 'ts', '--window', '7m'],
    /--window 7m .*: give a window/,
  ],
  [
    'the window has no time',
    ['log.ndjson', 'log.ndjson', ...log, '--window', '1h'],
    /--time \(none\): give/,
  ],
  ['windows are too few', ['log.ndjson', 'log.ndjson', ...windows], /too few to learn .*; give/],
  ['a sample is empty', ['before.csv', 'empty.csv'], /^empty\.csv: .*holds no events/m],
  [
    'a log has no record that counts',
    ['log.ndjson', 'empty.csv', ...log],
    /the after sample holds no events/,
  ],
  ['a count is negative', ['before.csv', 'negative.csv'], /^negative\.csv: line 2 has a count/m],
];

describe.concurrent('wrong usage of weigh', () => {
  it.for(usage)(
    'when %s, exits 2 and says what to write, without a trace',
    async ([, args, says], { place }) => {
      place.write('before.csv', csv([10, 20]));
      place.write('after.csv', csv([20, 10]));
      place.write('empty.csv', 'category,count\n');
      place.write('negative.csv', 'category,count\nc0,-3\n');
      place.write('log.ndjson', hourly([[70, 20, 10]]));
      const { status, stdout, stderr } = await place.run(['weigh', ...args]);
      expect(stderr).toMatch(says);
      expect(stderr).not.toMatch(/^ +at /m);
      expect({ status, stdout }).toEqual({ status: 2, stdout: '' });
    },
  );
});
