/** Half-open span of event time. */
export interface Span {
  readonly fromMs: number;
  readonly toMs: number;
}

/**
 * Which past windows a strand is held against, named rather than copied: reading the stored
 * tallies by the same recipe gives the same reference, today or after a restart.
 */
export interface Recipe extends Span {
  /** Windows that share a step share the recipe. */
  readonly step: number;
  /** Spans in which the strand was in alarm. */
  readonly excluded: readonly Span[];
}

/** What of a strand's past may enter a reference. */
export interface UsablePast {
  /** Windows before it belong to a mix that has been replaced (a shift that settled). */
  readonly epochMs: number;
  readonly excluded: readonly Span[];
}

/** Categories that rose or fell together, and their common share. */
export interface Carriers {
  readonly categories: readonly string[];
  /** All categories that had a place in the table. */
  readonly named: readonly string[];
  /** Whether categories without a place of their own count among the carriers. */
  readonly unnamed: boolean;
  readonly before: number;
  readonly now: number;
}

/** What must be known of a raise to tell its end from its going on. */
export interface Alarm {
  readonly alertId: string;
  /** End of the window that raised it, and its start. */
  readonly startMs: number;
  readonly endMs: number;
  readonly sinceEarliestMs: number;
  /** The reference frozen at the raise. */
  readonly recipe: Recipe;
  readonly carriers: Carriers;
  /** Effective events of the raising window and of the reference (null: infinite). */
  readonly weightNow: number;
  readonly weightReference: number | null;
  readonly rho: number;
  /** null: infinite. */
  readonly df2: number | null;
  readonly tolerance: number;
}

/** A mix that was replaced when its shift settled; watched in case it comes back. */
export interface Former extends UsablePast {
  readonly alarm: Alarm;
}

/** What judging remembers of a strand between windows. */
export interface StrandMemory extends UsablePast {
  /** Start of its first window with events, end of its last. */
  readonly firstMs: number;
  readonly lastMs: number;
  readonly recipe: Recipe | null;
  readonly alarm: Alarm | null;
  readonly former: Former | null;
  /** An alert that has returned and waits for a person; a new shift continues it. */
  readonly returnedAlertId: string | null;
}
