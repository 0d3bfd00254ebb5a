import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';

import * as fixtures from './fixtures.js';
import { judge } from './judgement.js';
import type { Line } from './judgement.js';
import { familyNames, methods } from './methods.js';
import { tableOf } from './report.js';

/** Set by the full check, where a helper program that is absent is a failure. */
const mustRegenerate = process.env.TALLYWARD_REQUIRE_ALL !== undefined;
const absent = fixtures.lacking();
const fresh = absent.length === 0;
const committed = fixtures.readSample();
const folder = mkdtempSync(join(tmpdir(), 'tallyward-accuracy-'));
let lines: readonly Line[] = [];

function all(): Line[] {
  if (!fresh) {
    return judge(new Map(familyNames.map((f) => [f, fixtures.sampled(committed, f)])), (asked) =>
      fixtures.answersOf(committed, asked),
    );
  }
  fixtures.regenerate(folder);
  return judge(new Map(familyNames.map((f) => [f, fixtures.regenerated(folder, f)])), (asked) =>
    fixtures.decide(folder, asked),
  );
}

beforeAll(() => {
  if (!fresh) {
    const sample = 'the committed sample (200 rows each, noncentral F 100)';
    console.log(`${absent.join(' and ')} not found: using ${sample}.`);
  }
  lines = all();
  console.log(tableOf(lines));
});

afterAll(() => rmSync(folder, { recursive: true, force: true }));

describe('accuracy against R and mpmath', () => {
  it('both oracles are here wherever everything is required', () => {
    expect(mustRegenerate ? absent : []).toEqual([]);
  });

  it('fixtures made anew agree with the committed sample', () => {
    const anew = fresh ? fixtures.readSample(join(folder, 'sample.json')) : committed;
    expect(fixtures.differences(committed, anew)).toEqual([]);
  });

  it.each(methods.map(({ name }) => name))('%s meets its goal at every argument', (name) => {
    const own = lines.filter(({ method }) => method.name === name);
    // R has no G2
    const oracles = name === 'likelihoodRatio, statistic' ? ['mpmath'] : ['mpmath', 'R'];
    expect(own.map(({ oracle }) => oracle)).toEqual(oracles);
    expect(own.flatMap(({ missed }) => missed.slice(0, 3))).toEqual([]);
  });
});
