import { formatInstant } from '../clock/format.js';
import { parseStrandKey } from '../config/strand.js';
import type { Alert, AlertKind, AlertState } from '../terms/alert.js';
import type { Evidence, ReferenceNote } from '../terms/evidence.js';

export type Json =
  null | boolean | number | string | readonly Json[] | { readonly [key: string]: Json };

/** One alert as published JSON: times are RFC 3339 in UTC, shares are fractions 0..1. */
export interface AlertData {
  readonly id: string;
  readonly continues: string | null;
  readonly mix: string;
  /** Value by split field; empty for the whole of the mix. */
  readonly strand: Readonly<Record<string, string>>;
  readonly kind: AlertKind;
  readonly provisional: boolean;
  readonly state: AlertState;
  readonly sentence: string;
  readonly raisedAt: string;
  readonly window: { readonly start: string; readonly end: string };
  readonly since: {
    readonly estimate: string;
    readonly earliest: string;
    readonly latest: string;
  };
  readonly ended: { readonly at: string; readonly how: string } | null;
  readonly evidence: Json;
  readonly where: null;
}

/**
 * The JSON of one alert, the same in `rehearse`, in webhooks and in the API. Pure: the same alert
 * gives the same object, keys in the same order.
 *
 * @throws RangeError when a time of the alert cannot be written as an RFC 3339 instant.
 */
export function alertData(alert: Alert): AlertData {
  return {
    id: alert.id,
    continues: alert.continues,
    mix: alert.mix,
    strand: parseStrandKey(alert.strand),
    kind: alert.kind,
    provisional: alert.provisional,
    state: alert.state,
    sentence: alert.sentence,
    raisedAt: formatInstant(alert.raisedAtMs),
    window: {
      start: formatInstant(alert.window.startMs),
      end: formatInstant(alert.window.endMs),
    },
    since: {
      estimate: formatInstant(alert.since.estimateMs),
      earliest: formatInstant(alert.since.earliestMs),
      latest: formatInstant(alert.since.latestMs),
    },
    ended:
      alert.ended === null ? null : { at: formatInstant(alert.ended.atMs), how: alert.ended.how },
    evidence: evidenceData(alert.evidence),
    where: alert.where,
  };
}

/** The JSON of a verdict's evidence, also for `rehearse --verdicts`. */
export function evidenceData(evidence: Evidence): Json {
  return plainJson({ ...evidence, reference: referenceData(evidence.reference) });
}

function referenceData(note: ReferenceNote): Json {
  return {
    yardstick: note.yardstick,
    windows: note.windows,
    events: note.events,
    from: note.fromMs === null ? null : formatInstant(note.fromMs),
    to: note.toMs === null ? null : formatInstant(note.toMs),
    provisional: note.provisional,
  };
}

/** JSON has no infinities: they, and what is not a number, become null. Absent keys stay away. */
export function plainJson(value: unknown): Json {
  if (typeof value === 'number') return Number.isFinite(value) ? value : null;
  if (typeof value === 'string' || typeof value === 'boolean') return value;
  if (Array.isArray(value)) return value.map(plainJson);
  if (typeof value !== 'object' || value === null) return null;
  const entries = Object.entries(value).filter(([, item]) => item !== undefined);
  return Object.fromEntries(entries.map(([key, item]) => [key, plainJson(item)]));
}
