import type { TimeFormat } from '../terms/time.js';
import type { WindowLength } from '../terms/window.js';

export type { TimeFormat };

/** The configuration after reading, checking and filling in defaults. Durations in ms. */
export interface Config {
  /** Path as given, for messages. */
  readonly file: string;
  /** The file's text as read (before `${NAME}` is filled in), and `sha256:` + hex of it. */
  readonly text: string;
  readonly digest: string;
  /** Path of the SQLite file as written; relative ones are taken from the working directory. */
  readonly store: string;
  readonly listen: { readonly host: string; readonly port: number };
  readonly falseAlarms: Budget;
  readonly collectors: readonly CollectorConfig[];
  readonly mixes: readonly MixConfig[];
  readonly send: readonly SenderConfig[];
  /** Remarks for the person who wrote the file, e.g. that declared shares were scaled. */
  readonly notes: readonly string[];
}

/** False alarms a week that the user accepts. */
export interface Budget {
  readonly perWeek: number;
}

export interface TimeConfig {
  /** Path of the field, already split at its dots. */
  readonly field: readonly string[];
  readonly format: TimeFormat;
  /** IANA name; used where a stamp has no zone of its own. */
  readonly zone: string;
}

export type DecodeConfig =
  | { readonly kind: 'json' }
  /** Named groups become the record's fields. */
  | { readonly kind: 'pattern'; readonly pattern: string };

export type SourceConfig =
  /** Paths and globs as written. */
  { readonly kind: 'tail'; readonly paths: readonly string[] } | { readonly kind: 'stdin' };

export interface CollectorConfig {
  readonly name: string;
  readonly source: SourceConfig;
  readonly decode: DecodeConfig;
  readonly time: TimeConfig;
  /** Longest line in bytes, without its end. */
  readonly maxLineBytes: number;
}

/** One condition on a record; every key that is present must hold. */
export interface WhereConfig {
  readonly field: readonly string[];
  readonly is: readonly string[] | null;
  readonly atLeast: number | null;
  readonly atMost: number | null;
  /** Linear-time pattern, found anywhere in the value unless anchored. */
  readonly matches: string | null;
  readonly missing: boolean | null;
}

export type YardstickConfig =
  | {
      readonly kind: 'declared';
      /** In the order written; shares 0..1 that sum to 1, scaled where that was needed. */
      readonly shares: readonly { readonly category: string; readonly share: number }[];
      /** Half a unit of the last digit written, as a fraction. */
      readonly halfUnit: number;
    }
  | { readonly kind: 'rolling'; readonly lastMs: number }
  | { readonly kind: 'pinned'; readonly fromMs: number; readonly toMs: number }
  | {
      readonly kind: 'file';
      readonly path: string;
      /** One map a window, or a single map where the file names no windows. */
      readonly windows: readonly ReadonlyMap<string, number>[];
      readonly windowed: boolean;
    }
  | { readonly kind: 'previous'; readonly windows: number }
  | {
      readonly kind: 'season';
      readonly cycle: 'day' | 'week';
      readonly keep: number;
      /** Local dates, `YYYY-MM-DD`. */
      readonly except: readonly string[];
    };

export interface MixConfig {
  readonly name: string;
  readonly from: string;
  readonly category: readonly string[];
  readonly where: readonly WhereConfig[];
  /** Field paths; the strand's field names are these joined by dots. */
  readonly split: readonly (readonly string[])[];
  readonly window: WindowLength;
  readonly zone: string;
  readonly latenessMs: number;
  readonly yardstick: YardstickConfig;
  readonly tolerance: {
    readonly moved: number;
    readonly each: ReadonlyMap<string, number>;
  };
  /** Ordinal categories, low to high; null for nominal ones. */
  readonly ordered: readonly string[] | null;
  readonly limits: {
    readonly categoriesJudged: number;
    readonly categoriesStored: number;
    readonly strands: number;
    readonly forgetMs: number;
    readonly minEvents: number;
  };
  /** null: the longer of 24 h and 24 windows. */
  readonly settleMs: number | null;
  /** null: shares the global budget. */
  readonly falseAlarms: Budget | null;
}

export interface SenderConfig {
  readonly name: string;
  readonly webhook: string;
  /** The shared secret after `${NAME}` is filled in; never logged. */
  readonly secret: string | null;
  readonly freshMs: number;
  readonly digestMs: number;
}

/** One thing wrong with the configuration, at its place (1-based). */
export interface ConfigProblem {
  readonly line: number;
  readonly column: number;
  readonly message: string;
}
