import { xoroshiro128plus } from 'pure-rand/generator/xoroshiro128plus';

/** Seeded draws, quick enough for tens of millions of windows. */
export interface Chance {
  /** In (0, 1), 32 bits. */
  readonly uniform: () => number;
  readonly normal: () => number;
  readonly gamma: (shape: number) => number;
  readonly binomial: (n: number, p: number) => number;
}

const TWO_32 = 4294967296;
/** Neighbouring seeds begin alike: they are spread out, and the first draws thrown away. */
const SPREAD = 0x9e3779b1;
const THROWN_AWAY = 64;
/** Below this mean a binomial is found by walking up from 0. */
const WALK_BELOW = 10;

/**
 * Draws from one seed (32 bits); `mostEvents` bounds n of the binomial (a table of so many log
 * factorials is kept). Same seed, same draws.
 */
export function chance(seed: number, mostEvents: number): Chance {
  const source = xoroshiro128plus(Math.imul(seed + 1, SPREAD));
  for (let draw = 0; draw < THROWN_AWAY; draw += 1) source.next();
  const uniform = (): number => ((source.next() >>> 0) + 0.5) / TWO_32;
  const normal = polarNormal(uniform);
  const binomial = binomialDraw(uniform, logFactorials(mostEvents));
  return { uniform, normal, gamma: (shape) => gammaDraw(shape, uniform, normal), binomial };
}

/** Polar method (Marsaglia & Bray 1964, from memory); the second of each pair is kept. */
function polarNormal(uniform: () => number): () => number {
  let kept = Number.NaN;
  return () => {
    if (!Number.isNaN(kept)) {
      const value = kept;
      kept = Number.NaN;
      return value;
    }
    for (;;) {
      const x = 2 * uniform() - 1;
      const y = 2 * uniform() - 1;
      const s = x * x + y * y;
      if (s >= 1) continue;
      const scale = Math.sqrt((-2 * Math.log(s)) / s);
      kept = y * scale;
      return x * scale;
    }
  };
}

/** Gamma with unit scale (Marsaglia & Tsang 2000, from memory). */
function gammaDraw(shape: number, uniform: () => number, normal: () => number): number {
  if (shape < 1) return gammaDraw(shape + 1, uniform, normal) * uniform() ** (1 / shape);
  const d = shape - 1 / 3;
  const c = 1 / Math.sqrt(9 * d);
  for (;;) {
    const x = normal();
    const t = 1 + c * x;
    if (t <= 0) continue;
    const v = t * t * t;
    const u = uniform();
    const square = x * x;
    if (u < 1 - 0.0331 * square * square) return d * v;
    if (Math.log(u) < 0.5 * square + d * (1 - v + Math.log(v))) return d * v;
  }
}

function binomialDraw(
  uniform: () => number,
  logFactorial: Float64Array,
): (n: number, p: number) => number {
  const small = (n: number, p: number): number => {
    const odds = p / (1 - p);
    let mass = (1 - p) ** n;
    let left = uniform();
    for (let k = 0; k < n; k += 1) {
      if (left < mass) return k;
      left -= mass;
      mass *= (odds * (n - k)) / (k + 1);
    }
    return n;
  };
  const half = (n: number, p: number): number =>
    n * p < WALK_BELOW ? small(n, p) : rejection(n, p, uniform, logFactorial);
  return (n, p) => {
    if (n === 0 || p <= 0) return 0;
    if (p >= 1) return n;
    return p > 0.5 ? n - half(n, 1 - p) : half(n, p);
  };
}

/** Transformed rejection for n p >= 10 and p <= 1/2 (Hoermann 1993, from memory). */
function rejection(
  n: number,
  p: number,
  uniform: () => number,
  logFactorial: Float64Array,
): number {
  const spread = Math.sqrt(n * p * (1 - p));
  const b = 1.15 + 2.53 * spread;
  const a = -0.0873 + 0.0248 * b + 0.01 * p;
  const centre = n * p + 0.5;
  const sure = 0.92 - 4.2 / b;
  for (;;) {
    const u = uniform() - 0.5;
    const edge = 0.5 - Math.abs(u);
    const k = Math.floor(((2 * a) / edge + b) * u + centre);
    const v = uniform();
    if (edge >= 0.07 && v <= sure) return k;
    if (k < 0 || k > n) continue;
    const mode = Math.floor((n + 1) * p);
    const height = Math.log((v * (2.83 + 5.1 / b) * spread) / (a / (edge * edge) + b));
    const bound =
      logFactorial[mode] +
      logFactorial[n - mode] -
      logFactorial[k] -
      logFactorial[n - k] +
      (k - mode) * Math.log(p / (1 - p));
    if (height <= bound) return k;
  }
}

function logFactorials(most: number): Float64Array {
  const table = new Float64Array(most + 1);
  for (let n = 2; n <= most; n += 1) table[n] = table[n - 1] + Math.log(n);
  return table;
}
