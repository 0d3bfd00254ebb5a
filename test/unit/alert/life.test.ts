import { describe, expect, it } from 'vitest';

import {
  backToFormer,
  continued,
  raise,
  type Raise,
  returned,
  settled,
} from '../../../src/alert/life.js';
import type { Alert } from '../../../src/terms/alert.js';
import { sampleEvidence, startMs } from '../send/samples.js';

const endMs = startMs + 300_000;

function input(changed: Partial<Raise> = {}): Raise {
  return {
    mix: 'gateway',
    strand: 'region=north',
    kind: 'shift',
    window: { startMs, endMs },
    since: { estimateMs: startMs, earliestMs: startMs, latestMs: startMs },
    evidence: sampleEvidence(),
    continues: null,
    provisional: false,
    zone: 'UTC',
    ...changed,
  };
}

const events = (alert: Alert) => alert.history.map(({ event }) => event);
const acknowledged = (alert: Alert): Alert => ({ ...alert, state: 'acknowledged' });

describe('a raise', () => {
  it('is unacknowledged, open, and dated by the end of its window', () => {
    const alert = raise(input());
    expect(alert).toMatchObject({ state: 'unacknowledged', ended: null, raisedAtMs: endMs });
    expect(alert.history).toEqual([{ atMs: endMs, event: 'raised', note: '' }]);
  });

  it('has an id that depends on what it is about alone', () => {
    const id = raise(input()).id;
    expect(raise(input({ evidence: sampleEvidence({ logP: -99 }), continues: 'x' })).id).toBe(id);
    const others = [
      input({ mix: 'parcels' }),
      input({ strand: 'region=south' }),
      input({ kind: 'creep' }),
      input({ window: { startMs, endMs: endMs + 1 } }),
    ].map((one) => raise(one).id);
    expect(new Set([id, ...others]).size).toBe(5);
  });

  it('names cannot run into each other in an id', () => {
    const one = raise(input({ mix: 'a,b', strand: 'c=d' }));
    const other = raise(input({ mix: 'a', strand: 'b,c=d' }));
    expect(one.id).not.toBe(other.id);
  });
});

describe('the end of an alert', () => {
  it('unacknowledged waits for a person', () => {
    const alert = returned(raise(input()), endMs + 1, 'a note');
    expect(alert).toMatchObject({
      state: 'returned',
      ended: { atMs: endMs + 1, how: 'returned' },
    });
    expect(events(alert)).toEqual(['raised', 'returned']);
    expect(alert.history.at(-1)?.note).toBe('a note');
  });

  it('acknowledged is over', () => {
    const alert = returned(acknowledged(raise(input())), endMs + 1, '');
    expect(alert.state).toBe('normal');
    expect(events(alert)).toEqual(['raised', 'returned', 'cleared']);
  });

  it('by settling acknowledges nothing', () => {
    const alert = settled(raise(input()), endMs + 1);
    expect(alert).toMatchObject({ state: 'returned', ended: { how: 'settled' } });
    expect(settled(acknowledged(raise(input())), endMs + 1).state).toBe('normal');
  });

  it('back to the former mix is said once more and changes neither state nor end', () => {
    const before = settled(raise(input()), endMs + 1);
    const after = backToFormer(before, endMs + 9);
    expect(after).toMatchObject({ state: before.state, ended: before.ended });
    expect(after.history.at(-1)).toEqual({
      atMs: endMs + 9,
      event: 'returned',
      note: 'back to the former mix',
    });
  });

  it('leaves the alert that was given as it was', () => {
    const alert = raise(input());
    const copy = structuredClone(alert);
    returned(alert, endMs + 1, '');
    continued(alert, endMs + 1, 'next');
    expect(alert).toEqual(copy);
  });
});

describe('an alert that is continued', () => {
  it('while it lasts ends by moving and is cleared', () => {
    const alert = continued(raise(input()), endMs + 5, 'next');
    expect(alert).toMatchObject({ state: 'normal', ended: { atMs: endMs + 5, how: 'moved' } });
    expect(events(alert)).toEqual(['raised', 'moved', 'cleared']);
  });

  it('acknowledged is cleared once only', () => {
    const alert = continued(acknowledged(raise(input())), endMs + 5, 'next');
    expect(events(alert)).toEqual(['raised', 'moved', 'cleared']);
  });

  it('after its return keeps its end and is cleared', () => {
    const alert = continued(returned(raise(input()), endMs + 1, ''), endMs + 5, 'next');
    expect(alert).toMatchObject({ state: 'normal', ended: { atMs: endMs + 1, how: 'returned' } });
    expect(alert.history.at(-1)).toMatchObject({ event: 'cleared', note: 'continued by next' });
  });
});
