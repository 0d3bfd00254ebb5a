import type { Alert, AlertEvent } from './alert.js';

/** What a sender is asked to deliver. Stored in the outbox with the round that caused it. */
export interface Message {
  /** Stable across retries and restarts. */
  readonly id: string;
  readonly sender: string;
  readonly event: Exclude<AlertEvent, 'cleared'> | 'cleared' | 'digest';
  /** Real time of its making. */
  readonly createdAtMs: number;
  /** One or more sentences for a person. */
  readonly summary: string;
  readonly alerts: readonly Alert[];
}

/** A message that has not been delivered yet. */
export interface Delivery {
  readonly message: Message;
  readonly attempts: number;
  readonly nextAttemptMs: number;
}
