/** An observed 2 x K table, rows in the order named. */
export interface EvidenceTable {
  readonly rows: readonly string[];
  readonly categories: readonly string[];
  readonly observed: readonly (readonly number[])[];
  readonly expected: readonly (readonly number[])[];
}

export interface ChiSquaredResult {
  readonly statistic: number;
  readonly df: number;
  readonly p: number;
  readonly logP: number;
}

/** Share of events that would have to change category; fractions 0..1. */
export interface Moved {
  readonly estimate: number;
  readonly atLeast: number;
  readonly atMost: number;
}

/** One category's share before and after; fractions 0..1. */
export interface Mover {
  readonly category: string;
  readonly before: number;
  readonly after: number;
  readonly difference: number;
  readonly interval: readonly [number, number];
  readonly residual: number;
  readonly blamed: boolean;
  /** What a bin of several categories consists of, the largest changes first; at most five. */
  readonly members?: readonly MemberShare[];
}

export interface MemberShare {
  readonly category: string;
  readonly before: number;
  readonly after: number;
}

export type Method = 'g2-f' | 'pearson' | 'exact' | 'monte-carlo' | 'goodness-of-fit';

/** What a comparison found. Field names are those of the published JSON (`weigh --json`). */
export interface Comparison {
  readonly method: Method;
  /** null where the method has none. */
  readonly statistic: number | null;
  readonly df: number | null;
  /** Second degrees of freedom; absent without dispersion, null when infinite. */
  readonly df2?: number | null;
  readonly p: number;
  readonly logP: number;
  /** Intra-window correlation used; absent where none was. */
  readonly rho?: number;
  readonly pearson: ChiSquaredResult;
  readonly g2: ChiSquaredResult;
  readonly table: EvidenceTable;
  /** Names inside `(pooled)`. */
  readonly pooled: readonly string[];
  readonly moved: Moved;
  readonly cramersV: number;
  readonly cohensW: number;
  readonly movers: readonly Mover[];
  /** Linear trend along the order of ordinal categories; only where an order was given. */
  readonly trend?: ChiSquaredResult;
}

/** What the window was held against, in words and numbers anyone can look up again. */
export interface ReferenceNote {
  readonly yardstick: 'declared' | 'baseline' | 'previous' | 'season';
  /** Windows in the reference; null for declared shares. */
  readonly windows: number | null;
  /** Events in the reference; null for declared shares. */
  readonly events: number | null;
  readonly fromMs: number | null;
  readonly toMs: number | null;
  /** Why this is not yet the yardstick asked for (e.g. a season with fewer than two cycles). */
  readonly provisional: string | null;
}

/** Evidence of a judged window. */
export interface Evidence extends Comparison {
  readonly reference: ReferenceNote;
  readonly rho: number;
  /** Weight of the window, and of the reference (null: infinite), in effective events. */
  readonly weightNow: number;
  readonly weightReference: number | null;
  /** Calibration of the tail; 1 where none applies. */
  readonly theta: number;
  /** logP before calibration. */
  readonly rawLogP: number;
  /** Natural log of the threshold p had to pass; null where the strand was outside the family. */
  readonly threshold: number | null;
  readonly logThreshold: number | null;
  /** Tolerance that `moved.atLeast` had to exceed. */
  readonly tolerance: number;
}
