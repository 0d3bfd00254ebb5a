import { timeParser } from '../../clock/time.js';
import type { CollectorConfig, MixConfig } from '../../config/types.js';
import { decoderOf } from '../../decode/decoder.js';
import { WantedFields } from '../../decode/fields.js';
import { NOT_SCALAR } from '../../decode/types.js';
import type { Decoder, FieldValue } from '../../decode/types.js';
import type { CountBatch } from '../../store/store.js';
import type { WaitingEvent } from '../../terms/partition.js';
import { inOrder } from './cells.js';
import { MixCounter } from './mixCounter.js';
import type { JudgedTo, Known } from './mixCounter.js';

/** Why a record, or its part in a mix, was not counted. */
export type Reason =
  | 'malformed'
  | 'no-match'
  | 'no-time'
  | 'bad-time'
  | 'future'
  | 'line-too-long'
  | 'invalid-utf-8'
  | 'not-scalar';

export interface CounterOptions {
  readonly config: CollectorConfig;
  /** The mixes that count from this collector; others are left out. */
  readonly mixes: readonly MixConfig[];
  readonly judgedTo: JudgedTo;
  readonly known?: Known;
}

/** Counts the records of one collector, whichever partition they come from. */
export class Counter {
  /** Stamp of the record that `read` decoded last. */
  atMs = 0;
  private readonly collector: string;
  private readonly decoder: Decoder;
  private readonly timeSlot: number;
  private readonly parseTime: (text: string) => number | null;
  private readonly mixes: readonly MixCounter[];
  private readonly rejected = new Map<Reason, number>();
  private accepted = 0;

  constructor({ config, mixes, judgedTo, known }: CounterOptions) {
    const wanted = new WantedFields();
    const slotOf = wanted.slotOf.bind(wanted);
    const before = known ?? { strands: [], categories: [] };
    this.collector = config.name;
    this.timeSlot = slotOf(config.time.field);
    this.mixes = mixes
      .filter((mix) => mix.from === config.name)
      .map((mix) => new MixCounter(mix, slotOf, judgedTo, before));
    this.parseTime = timeParser(config.time.format, config.time.zone);
    this.decoder = decoderOf(config.decode, wanted.paths);
  }

  /** Values of the record that `read` decoded last; overwritten by the next. */
  get fields(): readonly FieldValue[] {
    return this.decoder.fields;
  }

  /**
   * Decodes one line, valid UTF-8 without its end, into `fields` and `atMs`.
   *
   * @returns null when the record has a usable time, else why it is refused
   */
  read(bytes: Buffer, start: number, end: number): Reason | null {
    const refused = this.decoder.decode(bytes, start, end);
    if (refused !== null) return refused;
    const text = this.decoder.fields[this.timeSlot] ?? null;
    if (text === null) return 'no-time';
    const atMs = text === NOT_SCALAR ? null : this.parseTime(text);
    if (atMs === null) return 'bad-time';
    this.atMs = atMs;
    return null;
  }

  /**
   * Counts a record in every mix it belongs to. One that a mix could not use is refused once; it
   * is also accepted when another mix counted it.
   *
   * @param watermarkMs of its partition before this record
   */
  count(fields: readonly FieldValue[], atMs: number, watermarkMs: number | null): void {
    let counted = false;
    let refused = false;
    for (const mix of this.mixes) {
      const outcome = mix.count(fields, atMs, watermarkMs);
      if (outcome === 'counted') counted = true;
      else if (outcome === 'not-scalar') refused = true;
    }
    if (refused) this.reject('not-scalar', 1);
    if (counted || !refused) this.accepted += 1;
  }

  /** Where the record would count now. */
  peek(fields: readonly FieldValue[], atMs: number): WaitingEvent['cells'] {
    return this.mixes.flatMap((mix) => mix.peek(fields, atMs));
  }

  /** Counts a stored record that waited and whose bytes are gone. */
  countWaiting(waiting: WaitingEvent, watermarkMs: number | null): void {
    for (const cell of waiting.cells) {
      this.mixes.find((mix) => mix.name === cell.mix)?.countCell(cell, watermarkMs);
    }
    this.accepted += 1;
  }

  reject(reason: Reason, count: number): void {
    this.rejected.set(reason, (this.rejected.get(reason) ?? 0) + count);
  }

  /** What was counted since the last drain, in canonical order. */
  drain(): Omit<CountBatch, 'partitions'> {
    const { collector, accepted } = this;
    const batch = {
      tallies: this.mixes.flatMap((mix) => mix.drain()),
      accepted: accepted > 0 ? [{ collector, count: accepted }] : [],
      rejected: inOrder(this.rejected).map(([reason, count]) => ({ collector, reason, count })),
    };
    this.accepted = 0;
    this.rejected.clear();
    return batch;
  }
}
