import type { Partition } from '../../terms/partition.js';
import type { Tally } from '../../terms/tally.js';
import type { Window } from '../../terms/window.js';
import { StoreError, type CountBatch } from '../store.js';

/** Last instant a Date can hold, in epoch milliseconds (ECMAScript, time values). */
const MAX_TIME_MS = 8.64e15;

/** A time for people: RFC 3339 in UTC, or the bare number where it is no instant. */
export function timeText(ms: number): string {
  return Math.abs(ms) <= MAX_TIME_MS ? new Date(ms).toISOString() : String(ms);
}

const NEXT = 'nothing of this step was stored; report this as a fault of the program';

function isCount(value: number): boolean {
  return Number.isSafeInteger(value) && value >= 0;
}

function checkCount(value: number, what: () => string): void {
  if (isCount(value)) return;
  throw new StoreError(
    `${what()} is ${String(value)}, but counts are whole numbers from 0 to 2^53 - 1; ${NEXT}`,
  );
}

function isTime(value: number): boolean {
  return Number.isSafeInteger(value) && Math.abs(value) <= MAX_TIME_MS;
}

/** @throws StoreError unless start and end are instants and the start is first */
export function checkWindow(window: Window, what: () => string): void {
  const { startMs, endMs } = window;
  if (isTime(startMs) && isTime(endMs) && startMs < endMs) return;
  throw new StoreError(
    `${what()} has the window [${String(startMs)}, ${String(endMs)}) ms, but a window is two ` +
      `whole numbers of milliseconds, the start before the end; ${NEXT}`,
  );
}

/** @throws StoreError unless the time is a whole number of milliseconds that a Date can hold */
export function checkTime(ms: number, what: () => string): void {
  if (isTime(ms)) return;
  throw new StoreError(`${what()} is ${String(ms)}, which is no time in ms; ${NEXT}`);
}

function checkTally(tally: Tally): void {
  const place = (): string => `the tally of mix ${tally.mix}, strand ${tally.strand}`;
  checkWindow(tally.window, place);
  for (const [category, { onTime, late }] of tally.counts) {
    if (isCount(onTime) && isCount(late)) continue;
    const where = `${place()}, window from ${timeText(tally.window.startMs)}, category ${category}`;
    checkCount(onTime, () => `on-time count in ${where}`);
    checkCount(late, () => `late count in ${where}`);
  }
}

function checkPartition(partition: Partition): void {
  const place = `of partition ${partition.id} (${partition.name}) of ${partition.collector}`;
  checkCount(partition.position, () => `position ${place}`);
  const times = { firstMs: partition.firstMs, watermarkMs: partition.watermarkMs };
  for (const [name, ms] of Object.entries({ ...times, quietSinceMs: partition.quietSinceMs })) {
    if (ms !== null) checkTime(ms, () => `${name} ${place}`);
  }
}

/**
 * Refuses a batch with any number that cannot be stored exactly, before anything is written.
 * @throws StoreError naming the number and its place
 */
export function checkCountBatch(batch: CountBatch): void {
  batch.tallies.forEach(checkTally);
  batch.partitions.forEach(checkPartition);
  for (const { collector, count } of batch.accepted) {
    checkCount(count, () => `number of records accepted from ${collector}`);
  }
  for (const { collector, reason, count } of batch.rejected) {
    checkCount(count, () => `number of records refused from ${collector} as ${reason}`);
  }
}
