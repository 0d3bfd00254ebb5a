import { chiSquaredUpperQuantile } from './chiSquaredUpperQuantile.js';
import { fUpperQuantile } from './fUpperQuantile.js';
import { likelihoodRatio } from './likelihoodRatio.js';
import { pairDeviance } from './pairDeviance.js';
import { requireTable } from './preconditions.js';
import { sum } from './sum.js';

const TRIMS = 3;
const TRIM_LEVEL = 0.05;
/** Standard deviations under 1 from which V is told apart from chance. */
const FLAG = 3;

export interface Wander {
  /** phi of successive windows over phi of all; near 1 without wander, small with it. */
  readonly v: number;
  /** Standard deviation of V when the windows are independent. */
  readonly sd: number;
  readonly wanders: boolean;
  /** Deviance over its degrees of freedom, from the pooled shares and from window to window. */
  readonly phiBaseline: number;
  readonly phiSuccessive: number;
  /** The correlations (phi - 1)/(n0 - 1); may be negative. */
  readonly rhoBaseline: number;
  readonly rhoSuccessive: number;
}

/** Too little to say anything: fewer than 3 windows with events, no successive pair, one bin. */
export interface TooSparse {
  readonly tooSparse: true;
  readonly windows: number;
  readonly pairs: number;
  readonly bins: number;
}

/**
 * Whether a mix wanders by itself: successive windows differ less than windows far apart do.
 *
 * Null: the windows are independent given their shares. phi_b = G2 of the B x K table over
 * (B-1)(K-1); phi_s = trimmed mean over successive pairs of their own G2/(K-1), starting at
 * median(g)/(median of chi-squared on K-1 over K-1) and three times keeping those at most
 * F_.05/H(K-1, .6 H (K-1)) times it. rho = (phi - 1)/(n0 - 1), n0 = (M - sum N^2/M)/(B-1) the
 * usual mean size of unequal groups (N itself when equal). V = phi_s/phi_b'; with equal N phi_b'
 * is phi_b, else 1 + (phi_b - 1) min(1, (n0_s - 1)/(n0_b - 1)) carries it to the smaller sizes of
 * pairs, without which uneven traffic alone would look like wander. No phi is floored at 1.
 * Independent windows: mean 1, sd 1/sqrt(B (K-1)); flagged under 1 - 3 sd. Windows without any
 * scatter have V = 1.
 *
 * In: an anchor's windows in time order, each of K counts; one that is left out is given without
 * events, so that its neighbours are no pair. Never those of a rolling baseline: a real creep
 * would excuse itself. Out: see `Wander`, or `TooSparse`. Refuses an empty list, ragged windows and
 * negative cells with RangeError.
 * Source: von Neumann (1941, from memory) for the ratio; trimming and use own, n0 Snedecor &
 * Cochran (from memory). False flags 0 to .005 in the design's simulations. Cost: 4 B K logarithms.
 */
export function wander(windows: readonly (readonly number[])[]): Wander | TooSparse {
  requireTable('windows', windows);
  const filled = windows.filter((window) => sum(window) > 0);
  const df1 = (windows[0]?.length ?? 0) - 1;
  const pairs = successivePairs(windows, df1);
  const b = filled.length;
  if (b < 3 || pairs.length === 0 || df1 < 1) {
    return { tooSparse: true, windows: b, pairs: pairs.length, bins: df1 + 1 };
  }
  const phiBaseline = likelihoodRatio(filled).statistic / ((b - 1) * df1);
  const { phi: phiSuccessive, size } = trimmedMean(pairs, df1);
  const sizeBaseline = meanSize(filled.map(sum));
  const scale = sizeBaseline > 1 ? Math.min(1, (size - 1) / (sizeBaseline - 1)) : 1;
  const carried = 1 + (phiBaseline - 1) * scale;
  const v = carried > 0 ? phiSuccessive / carried : 1;
  const sd = 1 / Math.sqrt(b * df1);
  return {
    v,
    sd,
    wanders: v < 1 - FLAG * sd,
    phiBaseline,
    phiSuccessive,
    rhoBaseline: correlation(phiBaseline, sizeBaseline),
    rhoSuccessive: correlation(phiSuccessive, size),
  };
}

interface Pair {
  /** G2/(K-1) of the two windows. */
  readonly phi: number;
  readonly size: number;
}

function successivePairs(windows: readonly (readonly number[])[], df1: number): Pair[] {
  return windows.slice(1).flatMap((after, i) => {
    const before = windows[i] ?? [];
    const [n, m] = [sum(after), sum(before)];
    if (n === 0 || m === 0) return [];
    const g = pairDeviance({
      now: after.map((x) => x / n),
      weightNow: n,
      reference: before.map((x) => x / m),
      weightReference: m,
    });
    return [{ phi: g / df1, size: meanSize([n, m]) }];
  });
}

function trimmedMean(pairs: readonly Pair[], df1: number): Pair {
  const h = pairs.length;
  const bound = fUpperQuantile(TRIM_LEVEL / h, df1, 0.6 * h * df1);
  const middle = chiSquaredUpperQuantile(0.5, df1) / df1;
  let phi = median(pairs.map((pair) => pair.phi)) / middle;
  let kept = pairs;
  for (let trim = 0; trim < TRIMS; trim += 1) {
    const limit = bound * phi;
    kept = pairs.filter((pair) => pair.phi <= limit);
    phi = sum(kept.map((pair) => pair.phi)) / kept.length;
  }
  return { phi, size: sum(kept.map((pair) => pair.size)) / kept.length };
}

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  const at = (index: number): number => sorted[index] ?? 0;
  const half = Math.floor(sorted.length / 2);
  return sorted.length % 2 === 1 ? at(half) : (at(half - 1) + at(half)) / 2;
}

/** (M - sum N^2/M)/(B - 1): the size at which equal windows would show the same phi. */
function meanSize(events: readonly number[]): number {
  const total = sum(events);
  const squares = sum(events.map((n) => n * n));
  return (total - squares / total) / (events.length - 1);
}

function correlation(phi: number, size: number): number {
  return size > 1 ? (phi - 1) / (size - 1) : 0;
}
