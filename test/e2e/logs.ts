import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';
import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';

/** Shares of values; they need not have the sum 1 exactly, the first takes what is left. */
export type Shares = readonly (readonly [value: string, share: number])[];

/** Seeded chance for invented logs. */
export class Chance {
  private readonly generator: RandomGenerator;

  constructor(seed: number) {
    this.generator = xoroshiro128plus(seed);
  }

  /** In [0, 1). */
  uniform(): number {
    return (this.generator.next() >>> 0) / 2 ** 32;
  }

  /** A whole number from `least` to `most`, both possible. */
  whole(least: number, most: number): number {
    return least + Math.floor(this.uniform() * (most - least + 1));
  }

  pick(shares: Shares): string {
    let left = this.uniform();
    for (const [value, share] of shares) {
      left -= share;
      if (left < 0) return value;
    }
    return shares[0][0];
  }

  /** Sorted instants of a span, in whole milliseconds. */
  instants(count: number, fromMs: number, lengthMs: number): number[] {
    const found = Array.from(
      { length: count },
      () => fromMs + Math.floor(this.uniform() * lengthMs),
    );
    return found.sort((a, b) => a - b);
  }
}

export function iso(ms: number): string {
  return new Date(ms).toISOString();
}

/** One log line; `atMs` becomes its `ts`. */
export function line(atMs: number, fields: Readonly<Record<string, unknown>>): string {
  return `${JSON.stringify({ ts: iso(atMs), ...fields })}\n`;
}
