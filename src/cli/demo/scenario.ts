import type { RandomGenerator } from 'pure-rand/types/RandomGenerator';
import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/**
 * Saltmere Parcels, an invented carrier with four depots. Every parcel that leaves a depot writes
 * one line: what became of it, its size, how it was paid.
 */
const DEPOTS = ['saltmarsh', 'highmoor', 'ferrybank', 'oldquay'] as const;
type Depot = (typeof DEPOTS)[number];

type Shares = readonly (readonly [value: string, share: number])[];

const OUTCOMES: Shares = [
  ['delivered', 0.86],
  ['nobody-home', 0.08],
  ['damaged', 0.03],
  ['wrong-address', 0.02],
  ['refused', 0.01],
];

/** What the shifted depot's parcels become: damage takes from what would have arrived well. */
const SHIFTED: Shares = [
  ['delivered', 0.74],
  ['nobody-home', 0.08],
  ['damaged', 0.15],
  ['wrong-address', 0.02],
  ['refused', 0.01],
];

const SIZES: Shares = [
  ['letterbox', 0.4],
  ['small', 0.35],
  ['medium', 0.2],
  ['bulky', 0.05],
];

const PAYMENTS: Shares = [
  ['prepaid', 0.7],
  ['account', 0.2],
  ['on-delivery', 0.1],
];

/** Lines a second and depot in ordinary times. */
const LINES_PER_SECOND = 25;
export const SHIFTED_DEPOT: Depot = 'saltmarsh';
/** Its traffic grows when the other's mix shifts; its own mix stays like everyone's. */
export const GROWING_DEPOT: Depot = 'highmoor';
const GROWTH = 3;

/** Writes the log lines of a span of time, in order; repeatable from its seed. */
export class Scenario {
  private readonly generator: RandomGenerator;

  constructor(seed: number) {
    this.generator = xoroshiro128plus(seed);
  }

  /** Lines of [fromMs, toMs); `shifted` once the trouble has begun. */
  lines(fromMs: number, toMs: number, shifted: boolean): string {
    const parcels: { atMs: number; depot: Depot }[] = [];
    for (const depot of DEPOTS) {
      const growth = shifted && depot === GROWING_DEPOT ? GROWTH : 1;
      const expected = (LINES_PER_SECOND * growth * (toMs - fromMs)) / 1000;
      const count = Math.floor(expected + this.uniform());
      for (let n = 0; n < count; n++) {
        parcels.push({ atMs: Math.floor(fromMs + this.uniform() * (toMs - fromMs)), depot });
      }
    }
    parcels.sort((a, b) => a.atMs - b.atMs);
    return parcels.map(({ atMs, depot }) => this.line(atMs, depot, shifted)).join('');
  }

  private line(atMs: number, depot: Depot, shifted: boolean): string {
    const outcomes = shifted && depot === SHIFTED_DEPOT ? SHIFTED : OUTCOMES;
    const record = {
      ts: new Date(atMs).toISOString(),
      depot,
      outcome: this.pick(outcomes),
      size: this.pick(SIZES),
      payment: this.pick(PAYMENTS),
    };
    return `${JSON.stringify(record)}\n`;
  }

  private pick(shares: Shares): string {
    let left = this.uniform();
    for (const [value, share] of shares) {
      left -= share;
      if (left < 0) return value;
    }
    return shares[0]?.[0] ?? '';
  }

  private uniform(): number {
    return (this.generator.next() >>> 0) / 2 ** 32;
  }
}

/** The configuration that the demo runs on; it is written to a file so that it can be read. */
export function demoConfig(folder: string, port: number): string {
  return `# Saltmere Parcels, an invented carrier: what becomes of its parcels, depot by depot.
store: ${folder}/tallyward.db
listen: 127.0.0.1:${String(port)}
collectors:
  depots:
    tail: ["${folder}/depots.ndjson"]
    decode: json
    time: ts
mixes:
  parcel-outcomes:
    from: depots
    category: outcome
    split: [depot]
    window: 10s
    lateness: 1s
    yardstick: { baseline: { last: 20m } }
  parcel-sizes:
    from: depots
    category: size
    split: [depot]
    window: 10s
    lateness: 1s
    yardstick: { baseline: { last: 20m } }
  payments:
    from: depots
    category: payment
    window: 10s
    lateness: 1s
    yardstick: { baseline: { last: 20m } }
`;
}
