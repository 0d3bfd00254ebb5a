import { copyFileSync, existsSync, renameSync, statSync, truncateSync } from 'node:fs';
import { Chance, iso, line, type Shares } from '../e2e/logs.js';
import type { Place } from '../e2e/program.js';

const windowMs = 10_000;
const startMs = Date.UTC(2026, 4, 4);
const linesPerWindow = [50, 70] as const;

const usual: Shares = [
  ['delivered', 0.85],
  ['returned', 0.1],
  ['damaged', 0.05],
];
const troubled: Shares = [
  ['delivered', 0.35],
  ['returned', 0.1],
  ['damaged', 0.55],
];
const depots: Shares = [
  ['quayside', 0.5],
  ['hilltop', 0.5],
];

export const logName = 'logs/app.ndjson';

/** Hours of an invented log, written in pieces that end in the middle of lines. */
export class Writer {
  /** Written and to be written, by `mix strand start category`: the test's own count. */
  readonly counts = new Map<string, number>();
  private readonly place: Place;
  private readonly chance: Chance;
  private pending = Buffer.alloc(0);
  private window = 0;
  private rotations = 0;

  constructor(place: Place, seed: number) {
    this.place = place;
    this.chance = new Chance(seed);
  }

  /** Appends some windows' lines, but holds a seeded part of the last bytes back. */
  write(): void {
    this.make(this.chance.whole(2, 8));
    const held = this.chance.whole(0, 400);
    this.append(Math.max(0, this.pending.length - held));
  }

  /** Appends all that was held back, so that the file ends with a whole line. */
  flush(): void {
    this.append(this.pending.length);
  }

  /** Renames the file within its folder; the next write makes another of its name. */
  rename(): void {
    this.flush();
    this.rotations += 1;
    if (existsSync(this.path)) renameSync(this.path, `${this.path}.${this.rotations}`);
  }

  /** Copies the file and empties it; every second time it is soon longer than before. */
  truncate(): void {
    const before = this.bytes;
    this.rotations += 1;
    copyFileSync(this.path, `${this.path}.${this.rotations}`);
    truncateSync(this.path);
    if (this.rotations % 2 === 1) return;
    while (this.pending.length <= before) this.make(8);
    this.flush();
  }

  /** `device:inode` of the file that has the name now. */
  get identity(): string {
    const { dev, ino } = statSync(this.path, { bigint: true });
    return `${dev}:${ino}`;
  }

  get bytes(): number {
    return statSync(this.path).size;
  }

  private get path(): string {
    return this.place.path(logName);
  }

  private append(bytes: number): void {
    this.place.append(logName, this.pending.subarray(0, bytes));
    this.pending = this.pending.subarray(bytes);
  }

  private make(windows: number): void {
    const lines: string[] = [];
    for (const last = this.window + windows; this.window < last; this.window++) {
      const fromMs = startMs + this.window * windowMs;
      const count = this.chance.whole(...linesPerWindow);
      for (const atMs of this.chance.instants(count, fromMs, windowMs)) {
        lines.push(this.event(atMs, fromMs));
      }
    }
    this.pending = Buffer.concat([this.pending, Buffer.from(lines.join(''))]);
  }

  /** In the last third of every twenty minutes one depot is in trouble. */
  private event(atMs: number, fromMs: number): string {
    const depot = this.chance.pick(depots);
    const isTroubled = depot === 'quayside' && this.window % 120 >= 80;
    const outcome = this.chance.pick(isTroubled ? troubled : usual);
    const rowsOf = [
      ['outcomes', `{"depot":"${depot}"}`, outcome],
      ['depots', '{}', depot],
    ];
    for (const row of rowsOf) {
      const [mix, strand, category] = row;
      const key = [mix, strand, iso(fromMs).replace('.000', ''), category].join(' ');
      this.counts.set(key, (this.counts.get(key) ?? 0) + 1);
    }
    return line(atMs, { depot, outcome });
  }
}
