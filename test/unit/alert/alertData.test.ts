import { describe, expect, it } from 'vitest';

import { alertData, evidenceData } from '../../../src/alert/alertData.js';
import type { Evidence } from '../../../src/terms/evidence.js';
import { sampleAlert, sampleEvidence, startMs } from '../send/samples.js';

describe('the JSON of an alert', () => {
  it('has the keys of the contract, with state and sentence', () => {
    const data = alertData(sampleAlert());
    expect(Object.keys(data).sort()).toEqual([
      'continues',
      'ended',
      'evidence',
      'id',
      'kind',
      'mix',
      'provisional',
      'raisedAt',
      'sentence',
      'since',
      'state',
      'strand',
      'where',
      'window',
    ]);
    expect(data.strand).toEqual({ region: 'north' });
    expect(data.ended).toBeNull();
  });

  it('writes its times as instants in UTC', () => {
    const data = alertData(sampleAlert({ ended: { atMs: startMs + 600_000, how: 'returned' } }));
    expect(Date.parse(data.raisedAt)).toBe(startMs + 300_000);
    expect(Date.parse(data.window.start)).toBe(startMs);
    expect(Date.parse(data.since.earliest)).toBe(startMs - 300_000);
    expect(data.ended?.how).toBe('returned');
    expect(Date.parse(data.ended?.at ?? '')).toBe(startMs + 600_000);
    expect(data.window.end).toMatch(/Z$/);
  });

  it('has an empty strand for the whole of a mix', () => {
    expect(alertData(sampleAlert({ strand: 'all' })).strand).toEqual({});
  });
});

describe('the JSON of evidence', () => {
  it('writes the span of the reference as instants and drops the milliseconds', () => {
    const { reference } = evidenceData(sampleEvidence()) as {
      readonly reference: Readonly<Record<string, unknown>>;
    };
    expect(Object.keys(reference).sort()).toEqual([
      'events',
      'from',
      'provisional',
      'to',
      'windows',
      'yardstick',
    ]);
    expect(Date.parse(String(reference['to']))).toBe(startMs);
  });

  it('writes null for what is not finite, however deep it lies', () => {
    const data = evidenceData(
      sampleEvidence({
        logP: -Infinity,
        df2: Infinity,
        moved: { estimate: Number.NaN, atLeast: 0, atMost: 1 },
      }),
    );
    expect(data).toMatchObject({
      logP: null,
      df2: null,
      moved: { estimate: null, atLeast: 0, atMost: 1 },
    });
    expect(JSON.parse(JSON.stringify(data))).toEqual(data);
  });

  it('has no key for what a method does not have', () => {
    const without = Object.entries(sampleEvidence()).filter(([key]) => key !== 'df2');
    const evidence = Object.fromEntries(without) as unknown as Evidence;
    expect(evidenceData(evidence)).not.toHaveProperty('df2');
    expect(evidenceData(sampleEvidence())).toHaveProperty('df2', 40);
  });
});
