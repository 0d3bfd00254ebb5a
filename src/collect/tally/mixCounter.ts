import { calendarOf } from '../../clock/calendar.js';
import type { Calendar } from '../../clock/calendar.js';
import { WHOLE } from '../../config/strand.js';
import type { MixConfig } from '../../config/types.js';
import { NOT_SCALAR } from '../../decode/types.js';
import type { FieldPath, FieldValue } from '../../decode/types.js';
import { compileWhere } from '../../decode/where.js';
import type { Condition } from '../../decode/where.js';
import type { WaitingEvent } from '../../terms/partition.js';
import type { StrandKey, Tally } from '../../terms/tally.js';
import type { Window } from '../../terms/window.js';
import { Cells } from './cells.js';
import { Categories } from './names.js';
import { Strands } from './strands.js';

/** A strand is remembered for at least this many windows without an event. */
const MIN_FORGET_WINDOWS = 24;

/** What was counted before this process began, so that the caps go on where they were. */
export interface Known {
  readonly strands: readonly {
    readonly mix: string;
    readonly strand: StrandKey;
    /** Event time of its last event. */
    readonly lastMs: number;
  }[];
  readonly categories: readonly { readonly mix: string; readonly category: string }[];
}

export type WaitingCell = WaitingEvent['cells'][number];

/** End of the mix's last judged window; -Infinity before the first. */
export type JudgedTo = (mix: string) => number;

/** What a mix makes of a record: counted, not its own, or a value that cannot be a category. */
export type Outcome = 'counted' | 'elsewhere' | 'not-scalar';

/** Counts the records of one mix. */
export class MixCounter {
  readonly name: string;
  private readonly latenessMs: number;
  private readonly condition: Condition | null;
  private readonly categorySlot: number;
  private readonly splitSlots: readonly number[];
  private readonly calendar: Calendar;
  private readonly judgedTo: JudgedTo;
  private readonly categories: Categories;
  private readonly strands: Strands | null;
  private readonly cells: Cells;
  private window: Window = { startMs: 0, endMs: 0 };

  constructor(
    mix: MixConfig,
    slotOf: (path: FieldPath) => number,
    judgedTo: JudgedTo,
    known: Known,
  ) {
    this.name = mix.name;
    this.latenessMs = mix.latenessMs;
    this.condition = compileWhere(mix.where, slotOf);
    this.categorySlot = slotOf(mix.category);
    this.splitSlots = mix.split.map(slotOf);
    this.calendar = calendarOf(mix.window, mix.zone);
    this.judgedTo = judgedTo;
    const categories = known.categories.filter((entry) => entry.mix === mix.name);
    this.categories = new Categories(
      mix.limits.categoriesStored,
      categories.map((entry) => entry.category),
    );
    this.strands = strandsOf(mix, this.calendar, known);
    this.cells = new Cells(mix.name);
  }

  /**
   * @param fields decoded values of the record
   * @param watermarkMs of its partition before this record; null when there was none
   */
  count(fields: readonly FieldValue[], atMs: number, watermarkMs: number | null): Outcome {
    const record = this.read(fields);
    if (typeof record === 'string') return record;
    const window = this.windowAt(atMs);
    const late = this.isLate(window, watermarkMs);
    const category = this.categories.admit(record.category);
    this.cells.add(window, WHOLE, category, late);
    if (this.strands !== null) {
      this.cells.add(window, this.strands.admit(record.split, atMs), category, late);
    }
    return 'counted';
  }

  /** The cells in which the record would count now; nothing is counted or remembered. */
  peek(fields: readonly FieldValue[], atMs: number): WaitingCell[] {
    const record = this.read(fields);
    if (typeof record === 'string') return [];
    const strands = this.strands === null ? [WHOLE] : [WHOLE, this.strands.peek(record.split)];
    const place = { mix: this.name, ...this.windowAt(atMs) };
    const category = this.categories.peek(record.category);
    return strands.map((strand) => ({ ...place, strand, category }));
  }

  /** Counts a cell that waited and whose record can no longer be read. */
  countCell(cell: WaitingCell, watermarkMs: number | null): void {
    const window = { startMs: cell.startMs, endMs: cell.endMs };
    this.cells.add(window, cell.strand, cell.category, this.isLate(window, watermarkMs));
  }

  drain(): Tally[] {
    return this.cells.drain();
  }

  private read(
    fields: readonly FieldValue[],
  ): { category: string | null; split: (string | null)[] } | Exclude<Outcome, 'counted'> {
    if (this.condition !== null && !this.condition(fields)) return 'elsewhere';
    const category = fields[this.categorySlot] ?? null;
    if (category === NOT_SCALAR) return 'not-scalar';
    const split: (string | null)[] = [];
    for (const slot of this.splitSlots) {
      const value = fields[slot] ?? null;
      if (value === NOT_SCALAR) return 'not-scalar';
      split.push(value);
    }
    return { category, split };
  }

  /** Neighbouring records mostly share their window. */
  private windowAt(atMs: number): Window {
    if (atMs < this.window.startMs || atMs >= this.window.endMs) {
      this.window = this.calendar.windowAt(atMs);
    }
    return this.window;
  }

  private isLate(window: Window, watermarkMs: number | null): boolean {
    if (watermarkMs !== null && window.endMs + this.latenessMs <= watermarkMs) return true;
    return window.endMs <= this.judgedTo(this.name);
  }
}

function strandsOf(mix: MixConfig, calendar: Calendar, known: Known): Strands | null {
  if (mix.split.length === 0) return null;
  return new Strands({
    fields: mix.split.map((path) => path.join('.')),
    limit: mix.limits.strands,
    forgetMs: Math.max(mix.limits.forgetMs, MIN_FORGET_WINDOWS * calendar.nominalMs),
    known: known.strands.filter((entry) => entry.mix === mix.name),
  });
}
