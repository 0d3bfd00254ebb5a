import { Temporal } from 'temporal-polyfill';
import { DAY_MS, HOUR_MS } from './civil.js';

/** A stretch of time [startMs, endMs) in which a zone keeps one offset; ends may be infinite. */
export interface OffsetSpan {
  readonly startMs: number;
  readonly endMs: number;
  /** Local time minus UTC. */
  readonly offsetMs: number;
}

/** A time zone as its offsets. Answers are remembered, so most calls cost two comparisons. */
export interface Zone {
  readonly name: string;
  spanAt(ms: number): OffsetSpan;
  /** Local wall-clock time on the plain time line. */
  localMs(ms: number): number;
  /**
   * Instant of a local wall-clock time. A repeated one is taken as the earlier of the two, a
   * skipped one as with the offset before the gap (the "compatible" rule of RFC 5545, 3.3.5).
   */
  instantMs(localMs: number): number;
}

/** No zone was ever further from UTC than this (local mean times near the date line). */
export const MAX_OFFSET_MS = 16 * HOUR_MS;

/** Spans remembered per zone: about a century of zones that change twice a year. */
const MAX_SPANS = 256;

/** Whether the name is an IANA time zone that this machine knows; bare offsets are not. */
export function isZone(name: string): boolean {
  if (!/^[A-Za-z]/.test(name)) return false;
  try {
    Temporal.Instant.fromEpochMilliseconds(0).toZonedDateTimeISO(name);
    return true;
  } catch (error) {
    if (error instanceof RangeError) return false;
    throw error;
  }
}

/** The zone of an IANA name. Throws RangeError for a name that `isZone` refuses. */
export function zoneOf(name: string): Zone {
  if (!isZone(name)) throw new RangeError(`zone: "${name}" is not an IANA time zone`);
  const spanAt = rememberingSpans((ms) => findSpan(name, ms));
  return {
    name,
    spanAt,
    localMs: (ms) => ms + spanAt(ms).offsetMs,
    instantMs: (localMs) => instantOf(spanAt, localMs),
  };
}

function findSpan(name: string, ms: number): OffsetSpan {
  // A transition at ms itself begins the span, and "previous" is strict: hence the step forward.
  const after = Temporal.Instant.fromEpochMilliseconds(Math.floor(ms) + 1).toZonedDateTimeISO(name);
  const before = Temporal.Instant.fromEpochMilliseconds(Math.floor(ms)).toZonedDateTimeISO(name);
  return {
    startMs: after.getTimeZoneTransition('previous')?.epochMilliseconds ?? -Infinity,
    endMs: before.getTimeZoneTransition('next')?.epochMilliseconds ?? Infinity,
    offsetMs: Math.round(before.offsetNanoseconds / 1e6),
  };
}

function rememberingSpans(find: (ms: number) => OffsetSpan): (ms: number) => OffsetSpan {
  let last: OffsetSpan | null = null;
  let known: OffsetSpan[] = [];
  return (ms) => {
    if (last !== null && ms >= last.startMs && ms < last.endMs) return last;
    let found = known.find((span) => ms >= span.startMs && ms < span.endMs);
    if (found === undefined) {
      found = find(ms);
      if (known.length >= MAX_SPANS) known = [];
      known.push(found);
    }
    last = found;
    return found;
  };
}

function instantOf(spanAt: (ms: number) => OffsetSpan, localMs: number): number {
  let span = spanAt(localMs - MAX_OFFSET_MS);
  let offsetBefore = span.offsetMs;
  // Spans that begin after this cannot hold the local time.
  while (span.startMs <= localMs + MAX_OFFSET_MS + DAY_MS) {
    const ms = localMs - span.offsetMs;
    if (ms < span.startMs) return localMs - offsetBefore;
    if (ms < span.endMs) return ms;
    offsetBefore = span.offsetMs;
    span = spanAt(span.endMs);
  }
  return localMs - offsetBefore;
}
