import type { StrandKey, Tally } from '../../terms/tally.js';
import type { Window } from '../../terms/window.js';

interface MutableCount {
  onTime: number;
  late: number;
}

interface OpenWindow {
  readonly window: Window;
  readonly strands: Map<StrandKey, Map<string, MutableCount>>;
}

/** What was counted for one mix since the last drain. */
export class Cells {
  private readonly mix: string;
  private readonly windows = new Map<number, OpenWindow>();

  constructor(mix: string) {
    this.mix = mix;
  }

  add(window: Window, strand: StrandKey, category: string, late: boolean): void {
    let open = this.windows.get(window.startMs);
    if (open === undefined) {
      open = { window, strands: new Map() };
      this.windows.set(window.startMs, open);
    }
    let counts = open.strands.get(strand);
    if (counts === undefined) {
      counts = new Map();
      open.strands.set(strand, counts);
    }
    let count = counts.get(category);
    if (count === undefined) {
      count = { onTime: 0, late: 0 };
      counts.set(category, count);
    }
    if (late) count.late += 1;
    else count.onTime += 1;
  }

  /** Hands out the tallies by window, strand and category (code points), and starts anew. */
  drain(): Tally[] {
    const tallies: Tally[] = [];
    for (const [, { window, strands }] of inOrder(this.windows)) {
      for (const [strand, counts] of inOrder(strands)) {
        tallies.push({ mix: this.mix, strand, window, counts: new Map(inOrder(counts)) });
      }
    }
    this.windows.clear();
    return tallies;
  }
}

/** Entries by key: numbers by size, texts by code units (plain `<`). */
export function inOrder<K extends string | number, V>(map: ReadonlyMap<K, V>): [K, V][] {
  return [...map].sort(([a], [b]) => (a < b ? -1 : a > b ? 1 : 0));
}
