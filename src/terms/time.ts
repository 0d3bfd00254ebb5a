/** How a time stamp is written. */
export type TimeFormat =
  | { readonly kind: 'iso' }
  | { readonly kind: 'epoch'; readonly unit: 's' | 'ms' | 'us' | 'ns' }
  /** A date pattern in the letters of Unicode LDML (UTS 35). */
  | { readonly kind: 'ldml'; readonly pattern: string };

/**
 * What reading a configuration must know about time. `clock/timeTools.ts` is the one that is used;
 * it is passed in because `config` and `clock` do not import each other.
 */
export interface TimeTools {
  /** `5m`, `14d` and the like to milliseconds; null when it is none. */
  parseDuration(text: string): number | null;
  formatDuration(ms: number): string;
  /** An ISO 8601 text to epoch milliseconds; `zone` where it names none; null when it is none. */
  parseInstant(text: string, zone: string): number | null;
  /** Whether the name is in the IANA time zone database of this machine. */
  isZone(name: string): boolean;
  /** What is wrong with an LDML pattern and what to write; null when it can be used. */
  ldmlProblem(pattern: string): string | null;
}
