import { estimateDispersion } from '../../src/stats/estimateDispersion.js';
import { peel } from '../../src/stats/peel.js';
import { chance } from './chance.js';
import { rate } from './figures.js';
import type { Figure } from './figures.js';
import { besideReference } from './judged.js';
import { drawWindow, drawWindows, shifted, skewedMix, transferred } from './mix.js';

const MIX = skewedMix(12);
/** B, windows of the baseline. */
const WINDOWS = 24;

interface Shift {
  readonly name: string;
  readonly shares: readonly number[];
  /** Categories that moved of themselves. */
  readonly moving: readonly number[];
  /** The design's own figures, by size. */
  readonly design: readonly string[];
}

const SIZES = [
  { events: 500, rho: 0 },
  { events: 2000, rho: 0.002 },
  { events: 5000, rho: 0 },
  { events: 20_000, rho: 0.002 },
] as const;

/** The design's table 7a; which three categories rise there is not said, so these are ours. */
const SHIFTS: readonly Shift[] = [
  { name: 'none', shares: MIX, moving: [], design: ['.058', '.050', '.047', '.048'] },
  {
    name: '2nd to 3rd, 6 points',
    shares: transferred(MIX, 1, 2, 0.06),
    moving: [1, 2],
    design: ['.096', '.098', '.044', '.096'],
  },
  {
    name: '3rd +8',
    shares: shifted(MIX, [2], 0.08),
    moving: [2],
    design: ['.054', '.049', '.047', '.050'],
  },
  {
    name: '3rd +20',
    shares: shifted(MIX, [2], 0.2),
    moving: [2],
    design: ['.056', '.048', '.045', '.047'],
  },
  {
    name: '3rd, 6th, 9th +4',
    shares: shifted(MIX, [2, 5, 8], 0.04),
    moving: [2, 5, 8],
    design: ['.063', '.070', '.046', '.065'],
  },
];

/** How often peeling blames a category that did not move. */
export function measureBlame(run: { seed: number; repetitions: number }): Figure[] {
  return SHIFTS.flatMap((shift, i) =>
    SIZES.map((size, j) => {
      const seed = run.seed + i * SIZES.length + j;
      const isFalse = falseBlame(shift, { ...size, seed });
      let hits = 0;
      for (let i = 0; i < run.repetitions; i += 1) if (isFalse()) hits += 1;
      return {
        what: `${shift.name}, N ${size.events} rho ${size.rho}`,
        ...rate(hits, run.repetitions),
        goal: { atMost: 0.1 },
        design: shift.design[j],
      };
    }),
  );
}

function falseBlame(
  { shares, moving }: Shift,
  { events, rho, seed }: { events: number; rho: number; seed: number },
): () => boolean {
  const random = chance(seed, events);
  return () => {
    const past = estimateDispersion(drawWindows(random, { shares: MIX, events, rho }, WINDOWS));
    const now = drawWindow(random, { shares, events, rho });
    const { blamed } = peel(besideReference(now, past));
    return blamed.some(({ index }) => !moving.includes(index));
  };
}
