import { createHash } from 'node:crypto';
import type { Alert, AlertEvent, AlertKind, AlertTransition, Since } from '../terms/alert.js';
import type { Evidence } from '../terms/evidence.js';
import type { StrandKey } from '../terms/tally.js';
import type { Window } from '../terms/window.js';
import { shiftSentence } from './sentence.js';

/** What a raise is made of. */
export interface Raise {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly kind: AlertKind;
  readonly window: Window;
  readonly since: Since;
  readonly evidence: Evidence;
  /** The alert that this one goes on from. */
  readonly continues: string | null;
  /** Held against a stand-in for the yardstick that was asked for. */
  readonly provisional: boolean;
  readonly zone: string;
}

/** A new alert, unacknowledged. Its id depends on what it is about alone, so replay repeats it. */
export function raise(input: Raise): Alert {
  const { mix, strand, kind, window, since, evidence } = input;
  const event: AlertTransition = { atMs: window.endMs, event: 'raised', note: '' };
  return {
    id: alertId(mix, strand, kind, window.endMs),
    continues: input.continues,
    mix,
    strand,
    kind,
    provisional: input.provisional,
    state: 'unacknowledged',
    raisedAtMs: window.endMs,
    window,
    since,
    ended: null,
    sentence: shiftSentence({ mix, strand, evidence, since, zone: input.zone }),
    evidence,
    where: null,
    history: [event],
  };
}

/** The mix is back at its reference: an unacknowledged alert waits for a person. */
export function returned(alert: Alert, atMs: number, note: string): Alert {
  return end(alert, atMs, 'returned', 'returned', note);
}

/** The shift lasted and became the reference; that acknowledges nothing. */
export function settled(alert: Alert, atMs: number): Alert {
  return end(alert, atMs, 'settled', 'settled', 'the new mix is now the reference');
}

/** A settled shift went back to the former mix: said once more, without a new alert. */
export function backToFormer(alert: Alert, atMs: number): Alert {
  return add(alert, { atMs, event: 'returned', note: 'back to the former mix' });
}

/** The alert gives way to another that continues it: by moving again, or by a new shift. */
export function continued(alert: Alert, atMs: number, by: string): Alert {
  const moved =
    alert.ended === null ? end(alert, atMs, 'moved', 'moved', `moved again: ${by}`) : alert;
  if (moved.state === 'normal') return moved;
  return add({ ...moved, state: 'normal' }, { atMs, event: 'cleared', note: `continued by ${by}` });
}

function end(
  alert: Alert,
  atMs: number,
  how: 'returned' | 'settled' | 'moved',
  event: AlertEvent,
  note: string,
): Alert {
  const state = alert.state === 'acknowledged' ? 'normal' : 'returned';
  const ended: Alert = { ...add(alert, { atMs, event, note }), state, ended: { atMs, how } };
  return state === 'normal' ? add(ended, { atMs, event: 'cleared', note: '' }) : ended;
}

function add(alert: Alert, transition: AlertTransition): Alert {
  return { ...alert, history: [...alert.history, transition] };
}

function alertId(mix: string, strand: StrandKey, kind: AlertKind, endMs: number): string {
  const text = JSON.stringify([mix, strand, kind, endMs]);
  return createHash('sha256').update(text).digest('hex').slice(0, 16);
}
