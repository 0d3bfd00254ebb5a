import { describe, expect, it } from 'vitest';
import { collectorWatermark } from '../../../src/collect/watermark.js';
import type { Progress } from '../../../src/collect/watermark.js';

const MINUTE = 60_000;

/** A live partition at its end, from minute `first` to minute `last`. */
function part(
  first: number | null,
  last: number | null,
  changes: Partial<Progress> = {},
): Progress {
  return {
    firstMs: first === null ? null : first * MINUTE,
    watermarkMs: last === null ? null : last * MINUTE,
    ended: false,
    quietSinceMs: null,
    atEnd: true,
    ...changes,
  };
}

const minutes = (ms: number | null) => (ms === null ? null : ms / MINUTE);
const of = (...partitions: Progress[]) => minutes(collectorWatermark(partitions, 'once', false));

describe('the watermark of a collector', () => {
  it('given no partitions, is unknown', () => {
    expect(of()).toBe(null);
  });

  it('given live partitions, is the least of theirs', () => {
    expect(of(part(0, 50), part(2, 20), part(1, 30))).toBe(20);
  });

  it('given a partition without a record, is unknown, whatever the others say', () => {
    expect(of(part(0, 50), part(null, null))).toBe(null);
  });

  it('given an empty file at its end in rehearse, does not wait for it', () => {
    const empty = part(null, null);
    expect(minutes(collectorWatermark([part(0, 50), empty], 'rehearse', false))).toBe(50);
    const unread = part(null, null, { atEnd: false });
    expect(collectorWatermark([part(0, 50), unread], 'rehearse', false)).toBe(null);
  });

  it('given an ended partition, does not count it; given only such, is the greatest', () => {
    const ended = { ended: true };
    expect(of(part(0, 20, ended), part(21, 30))).toBe(30);
    expect(of(part(0, 20, ended), part(5, 40, ended))).toBe(40);
  });

  it('given dated files, lets go of those that another succeeded', () => {
    expect(of(part(0, 60), part(60, 119), part(120, 150))).toBe(150);
  });

  it('given a successor that began before the watermark, still waits for both', () => {
    expect(of(part(0, 60), part(59, 119))).toBe(60);
  });

  it('given less than ten minutes of event time, does not take the partition for finished', () => {
    expect(of(part(0, 9.99), part(20, 30))).toBe(9.99);
    expect(of(part(0, 10), part(20, 30))).toBe(30);
  });

  it('given unread bytes, does not take the partition for succeeded', () => {
    expect(of(part(0, 60, { atEnd: false }), part(60, 119))).toBe(60);
  });

  it('given quiet, lets go of the partition in live mode only', () => {
    const partitions = [part(0, 20, { quietSinceMs: 1 }), part(0, 30)];
    expect(minutes(collectorWatermark(partitions, 'live', false))).toBe(30);
    expect(minutes(collectorWatermark(partitions, 'once', false))).toBe(20);
    expect(minutes(collectorWatermark(partitions, 'rehearse', false))).toBe(20);
  });

  it('given an awaited file, is unknown', () => {
    expect(collectorWatermark([part(0, 20)], 'once', true)).toBe(null);
  });
});
