import { REST, WHOLE, strandKey } from '../../config/strand.js';
import type { StrandKey } from '../../terms/tally.js';
import { storedName } from './names.js';

export interface StrandsOptions {
  /** Names of the split fields; at least one. */
  readonly fields: readonly string[];
  /** Combinations counted apart; what is over goes where every split value is `(rest)`. */
  readonly limit: number;
  /** Event time without an event after which a strand frees its place. */
  readonly forgetMs: number;
  /** Strands seen before, with the time of their last event. */
  readonly known: Iterable<{ readonly strand: StrandKey; readonly lastMs: number }>;
}

interface Strand {
  readonly key: StrandKey;
  lastMs: number;
}

/** The split strands of one mix, at most `limit` at a time. */
export class Strands {
  private readonly options: StrandsOptions;
  private readonly rest: StrandKey;
  private readonly places = new Map<StrandKey, Strand>();
  /** By the raw values: saves making the key for every record. */
  private readonly byValues = new Map<string, Strand>();
  private newestMs = -Infinity;
  /** Before this event time no place can be free, so none is looked for. */
  private fullUntilMs = -Infinity;

  constructor(options: StrandsOptions) {
    this.options = options;
    this.rest = strandKey(options.fields.map((field) => [field, REST]));
    for (const { strand, lastMs } of options.known) {
      if (strand !== this.rest && strand !== WHOLE) {
        this.places.set(strand, { key: strand, lastMs });
      }
    }
  }

  /** The strand in which an event at `atMs` with these split values counts. */
  admit(values: readonly (string | null)[], atMs: number): StrandKey {
    if (atMs > this.newestMs) this.newestMs = atMs;
    const raw = rawKey(values);
    const strand = this.byValues.get(raw) ?? this.take(raw, values, atMs);
    if (strand === null) return this.rest;
    if (atMs > strand.lastMs) strand.lastMs = atMs;
    return strand.key;
  }

  /** Where it would count now; takes and frees no place. */
  peek(values: readonly (string | null)[]): StrandKey {
    const key = this.keyOf(values);
    return this.places.has(key) || this.places.size < this.options.limit ? key : this.rest;
  }

  private take(raw: string, values: readonly (string | null)[], atMs: number): Strand | null {
    const key = this.keyOf(values);
    let strand = this.places.get(key);
    if (strand === undefined) {
      if (this.places.size >= this.options.limit && !this.forget()) return null;
      strand = { key, lastMs: atMs };
      this.places.set(key, strand);
    }
    this.byValues.set(raw, strand);
    return strand;
  }

  /** Frees the places of strands long without an event; false when there were none. */
  private forget(): boolean {
    if (this.newestMs < this.fullUntilMs) return false;
    let oldestMs = Infinity;
    for (const strand of this.places.values()) {
      if (this.newestMs - strand.lastMs > this.options.forgetMs) this.places.delete(strand.key);
      else oldestMs = Math.min(oldestMs, strand.lastMs);
    }
    this.fullUntilMs = oldestMs + this.options.forgetMs;
    for (const [raw, strand] of this.byValues) {
      if (this.places.get(strand.key) !== strand) this.byValues.delete(raw);
    }
    return this.places.size < this.options.limit;
  }

  private keyOf(values: readonly (string | null)[]): StrandKey {
    return strandKey(this.options.fields.map((field, i) => [field, storedName(values[i] ?? null)]));
  }
}

/** One text for a combination of values; lengths keep their borders apart. */
function rawKey(values: readonly (string | null)[]): string {
  let key = '';
  for (const value of values) key += value === null ? '-' : `${value.length}:${value}`;
  return key;
}
