import type { Evidence } from './evidence.js';
import type { StrandKey } from './tally.js';
import type { Window } from './window.js';

/** What judging one window says. `blind` is a state shown now and never stored. */
export type VerdictName = 'steady' | 'shifted' | 'thin' | 'silent' | 'learning' | 'left-out';

export interface Verdict {
  readonly mix: string;
  readonly strand: StrandKey;
  readonly window: Window;
  readonly verdict: VerdictName;
  /** On-time events in the window. */
  readonly events: number;
  /** Why, in plain words. */
  readonly reason: string;
  readonly evidence: Evidence | null;
  /** Digest of the configuration (its text is stored) and the program's version. */
  readonly configDigest: string;
  readonly version: string;
}
