import { describe, expect, it } from 'vitest';

import { raise } from '../../../src/alert/life.js';
import { conclude } from '../../../src/schedule/conclude.js';
import type { Examined } from '../../../src/schedule/examine.js';
import { planMixes } from '../../../src/schedule/plan.js';
import type { Alert } from '../../../src/terms/alert.js';
import type { Alarm, StrandMemory } from '../../../src/terms/recipe.js';
import { sampleEvidence } from '../send/samples.js';
import { configOf, MINUTE, mixOf, T0 } from './scene.js';

const [plan] = planMixes(configOf([mixOf()]));
const window = { startMs: T0 + 60 * MINUTE, endMs: T0 + 61 * MINUTE };
/** A step that ended after the shift had begun: it reaches into the alarm. */
const recipe = { step: 7, fromMs: T0 - 5 * MINUTE, toMs: T0 + 55 * MINUTE, excluded: [] };
const raised = { startMs: T0 + 56 * MINUTE, endMs: T0 + 57 * MINUTE };
const since = {
  estimateMs: T0 + 52 * MINUTE,
  earliestMs: T0 + 51 * MINUTE,
  latestMs: T0 + 54 * MINUTE,
};

function alertOf(provisional: boolean): Alert {
  return raise({
    mix: 'outcomes',
    strand: 'all',
    kind: 'shift',
    window: raised,
    since,
    evidence: sampleEvidence(),
    continues: null,
    provisional,
    zone: 'UTC',
  });
}

function inAlarm(alert: Alert, ends: Examined['ends']): Examined {
  if (plan === undefined) throw new Error('no plan');
  const alarm: Alarm = {
    alertId: alert.id,
    ...raised,
    sinceEarliestMs: since.earliestMs,
    recipe,
    carriers: { categories: ['bad'], named: ['ok', 'bad'], unnamed: false, before: 0.1, now: 0.2 },
    weightNow: 1000,
    weightReference: 40_000,
    rho: 0,
    df2: 40,
    tolerance: 0.01,
  };
  const memory: StrandMemory = {
    epochMs: T0 - 900 * MINUTE,
    excluded: [{ fromMs: T0 - 800 * MINUTE, toMs: T0 - 700 * MINUTE }],
    firstMs: T0 - 900 * MINUTE,
    lastMs: window.endMs,
    recipe,
    alarm,
    former: null,
    returnedAlertId: null,
  };
  const subject = { plan, strand: 'all', window, counts: new Map(), memory };
  const finding = { kind: 'silent', reason: 'no events' } as const;
  return { subject, memory, finding, again: null, ends, backToFormer: false };
}

function concluded(provisional: boolean, ends: Examined['ends']) {
  const alert = alertOf(provisional);
  const examined = inAlarm(alert, ends);
  const alerts = new Map([[alert.id, alert]]);
  return { alert, ...conclude({ examined, decision: null, since: null, alerts }) };
}

describe('the memory after a return', () => {
  it('leaves the whole shift out of the recipe in use, and drops spans out of reach', () => {
    const span = { fromMs: since.earliestMs, toMs: window.endMs };
    const { memory, alert } = concluded(false, 'returned');
    expect(memory.recipe).toEqual({ ...recipe, excluded: [span] });
    expect(memory.excluded).toEqual([span]);
    expect(memory).toMatchObject({ alarm: null, returnedAlertId: alert.id });
  });

  it('of a provisional alert leaves nothing out: it may have been the season', () => {
    const { memory, changes } = concluded(true, 'returned');
    expect(memory.recipe).toEqual(recipe);
    expect(memory.excluded).toHaveLength(1);
    expect(changes.map(({ tell }) => tell)).toEqual(['returned']);
  });
});

describe('the memory after settling', () => {
  it('begins anew at the raise and keeps the former mix', () => {
    const { memory } = concluded(false, 'settled');
    expect(memory).toMatchObject({ epochMs: raised.startMs, excluded: [], recipe: null });
    expect(memory.former?.epochMs).toBe(T0 - 900 * MINUTE);
  });

  it('of a provisional alert does not begin anew', () => {
    const { memory } = concluded(true, 'settled');
    expect(memory).toMatchObject({ epochMs: T0 - 900 * MINUTE, former: null, alarm: null });
  });
});

describe('a window in alarm', () => {
  it('without events is silent, and changes nothing', () => {
    const { verdict, changes, memory, alert } = concluded(false, null);
    expect(verdict).toBe('silent');
    expect(changes).toEqual([]);
    expect(memory.alarm?.alertId).toBe(alert.id);
  });

  it('whose alert is not stored is an error of the program, said with the id', () => {
    const alert = alertOf(false);
    const examined = inAlarm(alert, 'returned');
    const call = () => conclude({ examined, decision: null, since: null, alerts: new Map() });
    expect(call).toThrow(`alert ${alert.id} is not stored`);
  });
});
