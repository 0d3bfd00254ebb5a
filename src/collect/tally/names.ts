import { createHash } from 'node:crypto';
import { MISSING, REST, escapeCategory } from '../../config/strand.js';

/** Longest name of a category or split value in bytes of UTF-8; longer ones are cut. */
const MAX_NAME_BYTES = 256;

/** Hexadecimal digits of SHA-256 that keep cut names apart. */
const HASH_DIGITS = 16;

/**
 * The stored form of a category or split value: `(missing)` where there is none, a backslash
 * before a real value that begins with `(`, and at most `MAX_NAME_BYTES` bytes: a longer one is
 * cut and ends in `~` and a hash of the whole, so that different values stay different.
 */
export function storedName(value: string | null): string {
  if (value === null) return MISSING;
  const name = escapeCategory(value);
  // A UTF-16 unit is at most three bytes, so most names need no counting.
  if (name.length * 3 <= MAX_NAME_BYTES || Buffer.byteLength(name) <= MAX_NAME_BYTES) return name;
  const hash = createHash('sha256').update(value).digest('hex').slice(0, HASH_DIGITS);
  return `${cutBytes(name, MAX_NAME_BYTES - HASH_DIGITS - 1)}~${hash}`;
}

/** The longest prefix of whole characters that fits. */
function cutBytes(text: string, maxBytes: number): string {
  const bytes = Buffer.from(text);
  let end = maxBytes;
  // Bytes 10xxxxxx continue a character.
  while (end > 0 && ((bytes[end] ?? 0) & 0xc0) === 0x80) end -= 1;
  return bytes.toString('utf8', 0, end);
}

/**
 * The categories of one mix, at most `limit` of them: what is over is `(rest)`. Made categories
 * take no place. Values become stored names once and are then looked up.
 */
export class Categories {
  private readonly limit: number;
  private readonly known: Set<string>;
  private readonly byValue = new Map<string, string>();

  constructor(limit: number, known: Iterable<string>) {
    this.limit = limit;
    this.known = new Set(known);
    this.known.delete(MISSING);
    this.known.delete(REST);
  }

  /** The name under which the value counts; a new one takes a place when there is one. */
  admit(value: string | null): string {
    if (value === null) return MISSING;
    const seen = this.byValue.get(value);
    if (seen !== undefined) return seen;
    const name = this.peek(value);
    if (name === REST) return REST;
    this.known.add(name);
    this.byValue.set(value, name);
    return name;
  }

  /** The name under which the value would count now; takes no place. */
  peek(value: string | null): string {
    const name = storedName(value);
    if (value === null || this.known.has(name) || this.known.size < this.limit) return name;
    return REST;
  }
}
