import { StoreError } from '../store.js';

/** Counts of one category, by its id within the mix. All are safe integers from 0 up. */
export interface Entry {
  readonly id: number;
  readonly onTime: number;
  readonly late: number;
}

const FORMAT = 1;
/** 53 bits in groups of seven. */
const MAX_VARINT_BYTES = 8;

function writeVarint(into: Uint8Array, at: number, value: number): number {
  let rest = value;
  let place = at;
  // Bit operations hold 32 bits only; larger values are divided first.
  while (rest >= 0x8000_0000) {
    into[place++] = (rest % 128) + 128;
    rest = Math.floor(rest / 128);
  }
  while (rest >= 128) {
    into[place++] = (rest & 127) | 128;
    rest >>>= 7;
  }
  into[place++] = rest;
  return place;
}

/**
 * Packs one tally: a format byte, then varints (seven bits a byte, lowest first): the number of
 * entries, and id, on time, late of each.
 *
 * @param entries in strictly rising order of id
 */
export function packCounts(entries: readonly Entry[]): Uint8Array {
  const bytes = new Uint8Array(1 + (1 + 3 * entries.length) * MAX_VARINT_BYTES);
  bytes[0] = FORMAT;
  let at = writeVarint(bytes, 1, entries.length);
  for (const entry of entries) {
    at = writeVarint(bytes, at, entry.id);
    at = writeVarint(bytes, at, entry.onTime);
    at = writeVarint(bytes, at, entry.late);
  }
  return bytes.subarray(0, at);
}

function damaged(what: string): StoreError {
  return new StoreError(`a stored tally is damaged: ${what}; put back the last backup`);
}

/** Reads varints one after the other; refuses to run past the end or past 2^53 - 1. */
class Reader {
  readonly #bytes: Uint8Array;
  #at = 1;

  constructor(bytes: Uint8Array) {
    this.#bytes = bytes;
  }

  next(): number {
    let value = 0;
    let scale = 1;
    for (let i = 0; i < MAX_VARINT_BYTES; i += 1) {
      const byte = this.#bytes[this.#at++];
      if (byte === undefined) throw damaged('it ends inside a number');
      value += (byte & 127) * scale;
      if (byte < 128) {
        if (!Number.isSafeInteger(value)) break;
        return value;
      }
      scale *= 128;
    }
    throw damaged('a number is too large');
  }

  get left(): number {
    return this.#bytes.length - this.#at;
  }
}

/**
 * Reads what `packCounts` wrote; entries in rising order of id.
 * @throws StoreError when the bytes are not a packed tally
 */
export function unpackCounts(bytes: Uint8Array): Entry[] {
  if (bytes[0] !== FORMAT) throw damaged(`its format is ${String(bytes[0])}, not ${FORMAT}`);
  const reader = new Reader(bytes);
  const length = reader.next();
  // An entry takes three bytes or more, so a wrong length is found before memory is taken.
  if (length * 3 > reader.left) throw damaged('it is shorter than it says');
  const entries: Entry[] = [];
  let lastId = -1;
  for (let i = 0; i < length; i += 1) {
    const entry = { id: reader.next(), onTime: reader.next(), late: reader.next() };
    if (entry.id <= lastId) throw damaged('its categories are out of order');
    lastId = entry.id;
    entries.push(entry);
  }
  if (reader.left > 0) throw damaged('it is longer than it says');
  return entries;
}

/**
 * Adds two lists of entries; both in rising order of id, an id may come more than once.
 * @returns strictly rising ids
 * @throws StoreError when a sum is over 2^53 - 1
 */
export function addEntries(left: readonly Entry[], right: readonly Entry[]): Entry[] {
  const sum: Entry[] = [];
  let i = 0;
  let j = 0;
  for (;;) {
    const a = left[i];
    const b = right[j];
    const next = b === undefined || (a !== undefined && a.id <= b.id) ? a : b;
    if (next === undefined) return sum;
    if (next === a) i += 1;
    else j += 1;
    const last = sum.at(-1);
    if (last?.id === next.id) sum[sum.length - 1] = addTwo(last, next);
    else sum.push(next);
  }
}

function addTwo(a: Entry, b: Entry): Entry {
  const sum = { id: a.id, onTime: a.onTime + b.onTime, late: a.late + b.late };
  if (Number.isSafeInteger(sum.onTime + sum.late)) return sum;
  throw new StoreError(
    'the events of one category in one window are over 2^53 - 1, too many to be counted ' +
      'exactly; see whether the collector counts the same input again and again',
  );
}
