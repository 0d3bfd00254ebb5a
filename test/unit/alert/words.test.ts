import { describe, expect, it } from 'vitest';

import {
  placeName,
  shiftedReason,
  shiftSentence,
  steadyReason,
} from '../../../src/alert/sentence.js';
import { chance, grouped, percent, points } from '../../../src/alert/words.js';
import type { Mover } from '../../../src/terms/evidence.js';
import { sampleEvidence, startMs } from '../send/samples.js';

describe('numbers in words', () => {
  it.each([
    [0, '0 %'],
    [0.00005, 'under 0.01 %'],
    [0.0001, '0.01 %'],
    [0.0042, '0.4 %'],
    [0.01, '1 %'],
    [0.123456, '12.3 %'],
    [1, '100 %'],
  ])('a share of %d reads %s', (share, text) => {
    expect(percent(share)).toBe(text);
  });

  it.each([
    [0.1, '+10 points'],
    [-0.034, '-3.4 points'],
    [0.0042, '+0.4 points'],
  ])('a difference of %d reads %s', (difference, text) => {
    expect(points(difference)).toBe(text);
  });

  it.each([
    [0, '9 times in 10'],
    [Math.log(0.5), '5 times in 10'],
    [Math.log(0.1), 'about once in 10 windows'],
    [Math.log(1 / 4321), 'about once in 4,000 windows'],
    [Math.log(1 / 960_000), 'about once in 1,000,000 windows'],
    [-9 * Math.LN10, 'less than once in a billion windows'],
    [-Infinity, 'less than once in a billion windows'],
  ])('a log p of %d reads %s', (logP, text) => {
    expect(chance(logP)).toBe(text);
  });

  it('thousands are told apart by commas', () => {
    expect([7, 999, 1000, 1_234_567].map(grouped)).toEqual(['7', '999', '1,000', '1,234,567']);
  });
});

const mover = (category: string, before: number, after: number, changed: Partial<Mover> = {}) => ({
  category,
  before,
  after,
  difference: after - before,
  interval: [0, 1] as const,
  residual: 0,
  blamed: true,
  ...changed,
});

describe('sentences', () => {
  const moved = { estimate: 0.1, atLeast: 0.07, atMost: 0.13 };
  const since = { estimateMs: startMs, earliestMs: startMs, latestMs: startMs };
  const evidence = sampleEvidence({
    moved,
    movers: [mover('declined', 0.08, 0.18), mover('approved', 0.9, 0.8, { blamed: false })],
  });

  it('say where, since when, how much, what and how rare, and blame only who is to blame', () => {
    const sentence = shiftSentence({
      mix: 'gateway',
      strand: 'region=north',
      evidence,
      since,
      zone: 'UTC',
    });
    expect(sentence).toMatch(/^gateway, region=north: the mix has shifted since about .*2026/);
    expect(sentence).toContain('10 % of events changed category (at least 7 %)');
    expect(sentence).toContain('declined rose from 8 % to 18 % (+10 points)');
    expect(sentence).not.toContain('approved');
    expect(sentence).toMatch(/By chance: about once in 10,000 windows\.$/);
  });

  it('name three and count the others', () => {
    const movers = ['a', 'b', 'c', 'd', 'e'].map((name) => mover(name, 0.1, 0.05));
    const reason = shiftedReason(sampleEvidence({ moved, movers }));
    expect(reason).toContain('a fell from 10 % to 5 % (-5 points)');
    expect(reason).toMatch(/c fell [^,]* and 2 more$/);
    expect(reason).not.toContain('d fell');
  });

  it('with nobody to blame name the largest changes', () => {
    const movers = [mover('x', 0.1, 0.2, { blamed: false })];
    expect(shiftedReason(sampleEvidence({ moved, movers }))).toContain('x rose from 10 % to 20 %');
  });

  it('of rare ones together name the one that changed most', () => {
    const members = [{ category: 'odd', before: 0.001, after: 0.05 }];
    const movers = [mover('(pooled)', 0.01, 0.06, { members })];
    expect(shiftedReason(sampleEvidence({ moved, movers }))).toContain(
      'rare ones together rose from 1 % to 6 % (mostly odd: 0.1 % to 5 %)',
    );
  });

  it('the whole of a mix goes by the name of the mix', () => {
    expect(placeName('gateway', 'all')).toBe('gateway');
    expect(placeName('gateway', 'region=north,zone=a')).toBe('gateway, region=north,zone=a');
  });
});

describe('why a window is steady', () => {
  const at = (atMost: number) =>
    sampleEvidence({ moved: { estimate: 0, atLeast: 0, atMost }, tolerance: 0.02 });

  it('says within tolerance only when more is excluded', () => {
    expect(steadyReason(at(0.02), false)).toBe('within tolerance: at most 2 % moved');
    expect(steadyReason(at(0.021), false)).toBe(
      'no shift shown; up to 2.1 % could have moved unseen',
    );
  });

  it('says what passed the test but not the gate', () => {
    expect(steadyReason(at(0.05), true)).toBe(
      'moved, but not shown to exceed the tolerance (at most 5 %)',
    );
  });
});
