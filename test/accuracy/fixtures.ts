import { spawnSync } from 'node:child_process';
import { existsSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

import { relativeError } from './measure.js';
import { families, familyNames } from './methods.js';
import type { Family } from './methods.js';

type Rows = readonly (readonly number[])[];

/** Arguments of one family and what the two oracles said of them, row by row. */
export interface Fixture {
  readonly rows: Rows;
  /** mpmath's values of the first rows. */
  readonly exact: Rows;
  readonly byR: Rows;
}

interface SampleOfFamily {
  readonly digests: Readonly<Record<string, string>>;
  /** Arguments, mpmath's values, R's values; text where a number is not finite. */
  readonly rows: readonly (readonly (readonly (number | string)[])[])[];
}

export type Sample = Readonly<Record<Family, SampleOfFamily>>;

/** What R's last bits may differ by between two machines; its digits are held to far less. */
const SAME_BY_R = 1e-13;

const here = (name: string): string => fileURLToPath(new URL(name, import.meta.url));

/** The sample at a path, by default the committed one. */
export function readSample(path = here('sample.json')): Sample {
  return JSON.parse(readFileSync(path, 'utf8')) as Sample;
}

/** A family's fixture as far as the sample holds it. */
export function sampled(sample: Sample, family: Family): Fixture {
  const column = (at: number): Rows => sample[family].rows.map((row) => row[at].map(Number));
  return { rows: column(0), exact: column(1), byR: column(2) };
}

/** What of R and mpmath this machine lacks, in words; empty when it has both. */
export function lacking(): string[] {
  const runs = (program: string, args: string[]) => spawnSync(program, args).status === 0;
  const r = runs('Rscript', ['--version']) ? [] : ['R'];
  return runs('/usr/bin/python3', ['-c', 'import mpmath']) ? r : [...r, 'mpmath'];
}

/** Runs both oracles over all arguments; their files stay in the folder. Throws on failure. */
export function regenerate(folder: string): void {
  run('bash', [here('make.sh'), folder]);
}

/** A family's whole fixture out of a folder that `regenerate` filled. */
export function regenerated(folder: string, family: Family): Fixture {
  const { argumentsEach, valuesEach } = families[family];
  return {
    rows: readRows(join(folder, `${family}.args.f64`), argumentsEach),
    exact: readRows(join(folder, `${family}.mp.f64`), valuesEach),
    byR: readRows(join(folder, `${family}.r.f64`), valuesEach),
  };
}

/** mpmath's values at rows where ours and R's disagree; the families asked about, not tables. */
export function decide(folder: string, asked: ReadonlyMap<Family, Rows>): Map<Family, Rows> {
  for (const [family, rows] of asked) {
    writeFileSync(join(folder, `${family}.asked.f64`), new Float64Array(rows.flat()));
  }
  run('/usr/bin/python3', ['-B', here('oracle.py'), folder, 'asked']);
  const answers = [...asked.keys()].map((family): [Family, Rows] => {
    const path = join(folder, `${family}.decided.f64`);
    return [family, existsSync(path) ? readRows(path, families[family].valuesEach) : []];
  });
  return new Map(answers);
}

/** As `decide`, out of a sample, which holds mpmath's values beside R's. */
export function answersOf(sample: Sample, asked: ReadonlyMap<Family, Rows>): Map<Family, Rows> {
  const answers = [...asked].map(([family, rows]): [Family, Rows] => {
    const known = sampled(sample, family);
    const answers = new Map(known.rows.map((row, at) => [row.join(), known.exact[at]]));
    return [family, rows.map((row) => answers.get(row.join()) ?? [])];
  });
  return new Map(answers);
}

function run(program: string, args: string[]): void {
  const { status, stderr, error } = spawnSync(program, args, { encoding: 'utf8' });
  if (error) throw error;
  if (status !== 0) throw new Error(`${args.join(' ')}: exit ${status ?? 'by signal'}\n${stderr}`);
}

/** Little-endian doubles, as the scripts write them. */
function readRows(path: string, width: number): number[][] {
  const bytes = readFileSync(path);
  return Array.from({ length: bytes.length / 8 / width }, (_, row) =>
    Array.from({ length: width }, (__, column) => bytes.readDoubleLE(8 * (row * width + column))),
  );
}

/** Where a sample made anew differs from the committed one, in words. */
export function differences(committed: Sample, anew: Sample): string[] {
  return familyNames.flatMap((family) => {
    const [before, after] = [committed[family], anew[family]];
    const digests = Object.keys(before.digests)
      .filter((word) => before.digests[word] !== after.digests[word])
      .map((word) => `${family}: the digest of the ${word} differs; look at the scripts' versions`);
    const rows = before.rows.length === after.rows.length ? [] : [`${family}: row count differs`];
    const cells = before.rows.flatMap((row, at) =>
      sameRow(row, after.rows[at] ?? []) ? [] : [`${family}: row ${at} differs`],
    );
    return [...digests, ...rows, ...cells];
  });
}

type SampleRow = SampleOfFamily['rows'][number];

function sameRow(before: SampleRow, after: SampleRow): boolean {
  const exactly = JSON.stringify(before.slice(0, 2)) === JSON.stringify(after.slice(0, 2));
  const close = (before[2] ?? []).every((value, at) => {
    const again = after[2]?.[at];
    // text is a value that is not finite
    return value === again || relativeError(Number(value), Number(again)) <= SAME_BY_R;
  });
  return exactly && close;
}
