import { sum } from './sum.js';
import { weighWindows, weightedMean } from './weighWindows.js';

/** Below these the correction costs more power than it is worth, or says nothing. */
const LEAST_WINDOWS = 8;
const LEAST_BINS = 3;
/** A trace this small is rounding: one event in a billion moves it further. */
const NO_SPREAD = 1e-18;

export interface BoxEpsilon {
  /** Share of the degrees of freedom that is left, from 1/(K-1) to 1. */
  readonly epsilon: number;
  /** Why epsilon is 1 without having been estimated; null when it was estimated. */
  readonly withheld: 'few windows' | 'few bins' | 'no spread' | null;
  /** B, windows with events. */
  readonly windows: number;
  /** tr S and tr S^2 of the covariance between bins; 0 with fewer than 2 windows. */
  readonly trace: number;
  readonly traceOfSquare: number;
}

/**
 * Box's epsilon: how far the bins are from sharing one dispersion.
 *
 * With s_bk = sqrt((x_bk + 3/8)/(N_b + 3K/8)), m_k their weighted means,
 * Z_bk = 2 sqrt(w_b) (s_bk - m_k), n = B - 1 and S = Z'Z/n the covariance between bins:
 * T2 = n^2/((n-1)(n+2)) (tr S^2 - (tr S)^2/n) and T1 = (tr S)^2 - 2 T2/n estimate tr(Sigma^2) and
 * (tr Sigma)^2 without bias, and epsilon = T1/(T2 (K-1)), kept within 1/(K-1) and 1. It is 1 when
 * all directions vary alike and 1/(K-1) when a single one carries everything;
 * `boxQuasiLikelihoodF` takes it off the degrees of freedom.
 *
 * In: B windows of K counts each, rho in 0..1 as found by `estimateDispersion`. Windows without
 * events are ignored. Out: see `BoxEpsilon`. With B < 8 or K < 3, or where the spread shows no
 * T2 > 0, epsilon is 1 (the test as it is) and `withheld` says why. Refuses an empty list, ragged
 * windows, negative cells and another rho with RangeError.
 * Source: Box (1954), Greenhouse & Geisser (1959), tr(S^2) by Bai & Saranadasa (1996), all from
 * memory. Measured against 50 digits on three sets of windows (test/published/lenses.py):
 * epsilon within 1e-11. Cost: B K^2.
 */
export function boxEpsilon(input: {
  readonly windows: readonly (readonly number[])[];
  readonly rho: number;
}): BoxEpsilon {
  const rows = standardised(input.windows, input.rho);
  const bins = input.windows[0]?.length ?? 0;
  const n = rows.length - 1;
  const { trace, traceOfSquare } = n > 0 ? traces(rows, n) : { trace: 0, traceOfSquare: 0 };
  const found = { windows: rows.length, trace, traceOfSquare };
  if (bins < LEAST_BINS) return { epsilon: 1, withheld: 'few bins', ...found };
  if (rows.length < LEAST_WINDOWS) return { epsilon: 1, withheld: 'few windows', ...found };
  const square = trace * trace;
  const t2 = ((n * n) / ((n - 1) * (n + 2))) * (traceOfSquare - square / n);
  if (!(trace > NO_SPREAD && t2 > 0)) return { epsilon: 1, withheld: 'no spread', ...found };
  const raw = (square - (2 * t2) / n) / (t2 * (bins - 1));
  return { epsilon: Math.min(1, Math.max(1 / (bins - 1), raw)), withheld: null, ...found };
}

/** Z: square roots of the shares, centred, each row scaled to the variance of one event. */
function standardised(windows: readonly (readonly number[])[], rho: number): number[][] {
  const weighed = weighWindows(windows, rho);
  const bins = windows[0]?.length ?? 0;
  const roots = weighed.windows.map((window, b) =>
    window.map((x) => Math.sqrt((x + 0.375) / ((weighed.events[b] ?? 0) + 0.375 * bins))),
  );
  const means = (roots[0] ?? []).map((_, k) =>
    weightedMean(
      roots.map((row) => row[k] ?? 0),
      weighed.weights,
    ),
  );
  return roots.map((row, b) => {
    const scale = 2 * Math.sqrt(weighed.weights[b] ?? 0);
    return row.map((s, k) => scale * (s - (means[k] ?? 0)));
  });
}

function traces(
  rows: readonly (readonly number[])[],
  n: number,
): { trace: number; traceOfSquare: number } {
  let [trace, traceOfSquare] = [0, 0];
  const bins = rows[0]?.length ?? 0;
  for (let i = 0; i < bins; i += 1) {
    for (let k = i; k < bins; k += 1) {
      const entry = sum(rows.map((row) => (row[i] ?? 0) * (row[k] ?? 0))) / n;
      if (i === k) trace += entry;
      traceOfSquare += (i === k ? 1 : 2) * entry * entry;
    }
  }
  return { trace, traceOfSquare };
}
