import type { Totals } from '../store/store.js';
import type { Alert } from '../terms/alert.js';
import type { Verdict } from '../terms/verdict.js';

/** Everything the metrics are made of, as plain values; lists in a canonical order. */
export interface MetricsSnapshot {
  /** Names from the configuration: their counters are there, at 0, before anything happened. */
  readonly mixes: readonly string[];
  readonly senders: readonly string[];
  readonly totals: Totals;
  /** The last verdict of every strand. */
  readonly latestVerdicts: readonly Verdict[];
  /** Alerts that are not in state normal; others may be among them and count as 0. */
  readonly alerts: readonly Alert[];
  /** End of the last judged window by mix. */
  readonly judgedToMs: ReadonlyMap<string, number>;
  readonly collectors: readonly {
    readonly name: string;
    readonly watermarkMs: number | null;
    readonly lagBytes: number | null;
  }[];
  /** Real time of the last committed round; null before the first. */
  readonly lastRoundMs: number | null;
  /** False alarms spent over those accepted, a fraction; null while unknown. */
  readonly budgetSpentRatio: number | null;
  readonly storeBytes: number;
}
