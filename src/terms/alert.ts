import type { Evidence } from './evidence.js';
import type { StrandKey } from './tally.js';
import type { Window } from './window.js';

/** States of IEC 62682 / ISA-18.2, without those that only people can bring about yet. */
export type AlertState = 'unacknowledged' | 'acknowledged' | 'returned' | 'normal';

export type AlertKind = 'shift' | 'creep' | 'divided' | 'impossible' | 'absence';

export type AlertEvent = 'raised' | 'moved' | 'returned' | 'settled' | 'cleared';

export interface AlertTransition {
  readonly atMs: number;
  readonly event: AlertEvent;
  readonly note: string;
}

/** First window of the shift: most likely, and the ends of its confidence set. */
export interface Since {
  readonly estimateMs: number;
  readonly earliestMs: number;
  readonly latestMs: number;
}

/** The life of one shift on one strand. Times are event time, so that replay is exact. */
export interface Alert {
  readonly id: string;
  readonly continues: string | null;
  readonly mix: string;
  readonly strand: StrandKey;
  readonly kind: AlertKind;
  readonly provisional: boolean;
  readonly state: AlertState;
  /** End of the window that raised it. */
  readonly raisedAtMs: number;
  readonly window: Window;
  readonly since: Since;
  readonly ended: {
    readonly atMs: number;
    readonly how: 'returned' | 'settled' | 'accepted' | 'moved';
  } | null;
  readonly sentence: string;
  readonly evidence: Evidence;
  readonly where: null;
  readonly history: readonly AlertTransition[];
}
