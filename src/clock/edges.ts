import type { WindowLength } from '../terms/window.js';
import type { Buckets } from './buckets.js';
import { HOUR_MS, floorTo, modulo } from './civil.js';
import { MAX_OFFSET_MS } from './zone.js';
import type { Zone } from './zone.js';

/** Where windows begin and end on the real time line, and what they are called locally. */
export interface Edges {
  /** The last edge at or before the instant. */
  readonly floor: (ms: number) => number;
  /** The first edge after the instant. */
  readonly ceil: (ms: number) => number;
  readonly ordinal: (startMs: number) => number;
  /** Local wall-clock time that the window beginning at `startMs` stands for. */
  readonly nominalLocalMs: (startMs: number) => number;
}

/**
 * Edges of windows up to an hour: every instant whose local time is a multiple of the length. An
 * hour that the clocks repeat has its windows twice. Where the clocks jump by less than the length
 * (half an hour in Lord Howe), or at an odd minute, one window is longer or shorter instead.
 */
function wallClockEdges(stepMs: number, zone: Zone): Edges {
  return {
    floor: (ms) => lastMultiple(zone, stepMs, ms),
    ceil: (ms) => firstMultipleAfter(zone, stepMs, ms),
    // Counted in UTC: local numbers would repeat with the hour.
    ordinal: (startMs) => Math.floor(startMs / stepMs),
    nominalLocalMs: (startMs) => floorTo(zone.localMs(startMs), stepMs),
  };
}

function lastMultiple(zone: Zone, stepMs: number, ms: number): number {
  let at = ms;
  // Ends: each turn goes back one span of the zone, and spans last longer than an hour.
  for (;;) {
    const span = zone.spanAt(at);
    const candidate = at - modulo(at + span.offsetMs, stepMs);
    if (candidate >= span.startMs) return candidate;
    at = span.startMs - 1;
  }
}

function firstMultipleAfter(zone: Zone, stepMs: number, ms: number): number {
  let span = zone.spanAt(ms);
  let candidate = ms + stepMs - modulo(ms + span.offsetMs, stepMs);
  while (candidate >= span.endMs) {
    span = zone.spanAt(span.endMs);
    candidate = span.startMs + modulo(-(span.startMs + span.offsetMs), stepMs);
  }
  return candidate;
}

/**
 * Edges of windows longer than an hour: a window begins when the local clock first reaches its
 * start, and a clock that was set back does not return to a window that has ended. So the window
 * that holds a change is longer or shorter, and one whose whole local span is skipped (30 December
 * 2011 in Apia) does not exist.
 */
function firstReachedEdges(buckets: Buckets, zone: Zone): Edges {
  const bucketAt = (ms: number): number => buckets.floor(furthestLocal(zone, ms));
  return {
    floor: (ms) => firstReached(zone, bucketAt(ms)),
    ceil: (ms) => firstReached(zone, buckets.after(bucketAt(ms))),
    ordinal: (startMs) => buckets.ordinal(bucketAt(startMs)),
    nominalLocalMs: bucketAt,
  };
}

/** Furthest local time that the zone's clocks have shown up to the instant. */
function furthestLocal(zone: Zone, ms: number): number {
  let span = zone.spanAt(ms);
  let furthest = ms + span.offsetMs;
  // A change further back than the widest step between two offsets has been overtaken.
  while (span.startMs > ms - 2 * MAX_OFFSET_MS) {
    const changeMs = span.startMs;
    span = zone.spanAt(changeMs - 1);
    furthest = Math.max(furthest, changeMs - 1 + span.offsetMs);
  }
  return furthest;
}

/** First instant at which the zone's clocks show the local time or a later one. */
function firstReached(zone: Zone, localMs: number): number {
  let span = zone.spanAt(localMs - MAX_OFFSET_MS);
  for (;;) {
    const ms = Math.max(span.startMs, localMs - span.offsetMs);
    if (ms < span.endMs) return ms;
    span = zone.spanAt(span.endMs);
  }
}

/** The edges of a window length: wall-clock ones up to an hour, else those first reached. */
export function edgesOf(length: WindowLength, buckets: Buckets, zone: Zone): Edges {
  return length.kind === 'sub-day' && length.ms <= HOUR_MS
    ? wallClockEdges(length.ms, zone)
    : firstReachedEdges(buckets, zone);
}
