import { counted, grouped } from '../alert/words.js';
import { formatInstant } from '../clock/format.js';
import type { RoundCommit } from '../terms/round.js';
import type { VerdictName } from '../terms/verdict.js';
import { type Ports, printLine } from './ports.js';
import { verdictLine } from './verdictLine.js';

const MINUTE_MS = 60_000;
/** Problems remembered so that each is told once. */
const MOST_PROBLEMS = 1_000;

/** What the daemon tells on standard output: what is not steady, and a summary a minute. */
export class Journal {
  private readonly ports: Pick<Ports, 'stdout'>;
  private readonly alertsOnly: boolean;
  private counts = new Map<VerdictName, number>();
  private lastSummaryMs: number | null = null;
  private told = new Set<string>();

  constructor(ports: Pick<Ports, 'stdout'>, alertsOnly: boolean) {
    this.ports = ports;
    this.alertsOnly = alertsOnly;
  }

  round(round: RoundCommit): void {
    for (const verdict of round.verdicts) {
      this.counts.set(verdict.verdict, (this.counts.get(verdict.verdict) ?? 0) + 1);
      if (verdict.verdict !== 'steady' && !this.alertsOnly) {
        printLine(this.ports.stdout, verdictLine(verdict));
      }
    }
    for (const alert of round.alerts) {
      const last = alert.history.at(-1);
      if (last?.event === 'raised') printLine(this.ports.stdout, `raised ${alert.sentence}`);
      else if (last !== undefined) {
        const note = last.note === '' ? '' : ` (${last.note})`;
        printLine(this.ports.stdout, `${last.event}${note} ${alert.sentence}`);
      }
    }
  }

  /** The summary once a minute; the first call only starts the minute. */
  everyMinute(nowMs: number): void {
    this.lastSummaryMs ??= nowMs;
    if (nowMs - this.lastSummaryMs >= MINUTE_MS) this.summary(nowMs);
  }

  summary(nowMs: number): void {
    const parts = [...this.counts].map(([verdict, n]) => `${grouped(n)} ${verdict}`);
    const closed = [...this.counts.values()].reduce((a, b) => a + b, 0);
    const text = closed === 0 ? 'no window closed' : `${counted(closed, 'window')} closed: `;
    printLine(this.ports.stdout, `${formatInstant(nowMs)}  ${text}${parts.join(', ')}`);
    this.counts = new Map();
    this.lastSummaryMs = nowMs;
  }

  /** Those not told before. */
  newProblems(problems: readonly string[]): string[] {
    const fresh = problems.filter((problem) => !this.told.has(problem));
    if (this.told.size + fresh.length > MOST_PROBLEMS) this.told = new Set();
    for (const problem of fresh) this.told.add(problem);
    return fresh;
  }
}
