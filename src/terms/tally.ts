import type { Window } from './window.js';

/**
 * Text form of a strand: `all` for the whole of a mix, else `field=value` pairs joined by commas,
 * fields in code-point order, values escaped (config/strand.ts writes and reads it).
 */
export type StrandKey = string;

/** Events of one category in one window: on time, and late (kept apart, shown in the sum). */
export interface Count {
  readonly onTime: number;
  readonly late: number;
}

/** The counts of one strand's window by category. */
export interface Tally {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly window: Window;
  readonly counts: ReadonlyMap<string, Count>;
}

/** On-time counts of one window by category: what judging sees. */
export type Counts = ReadonlyMap<string, number>;
