import type { Chance } from './chance.js';

/** K shares in proportion to 1, 1/2 .. 1/K; at K = 12 the third is .107, the last .027. */
export function skewedMix(categories: number): number[] {
  const raw = Array.from({ length: categories }, (_, k) => 1 / (k + 1));
  const total = raw.reduce((a, b) => a + b, 0);
  return raw.map((share) => share / total);
}

/** Some categories rise (or fall) by so much each; all others give way in proportion. */
export function shifted(
  shares: readonly number[],
  categories: readonly number[],
  by: number,
): number[] {
  const moving = new Set(categories);
  const others = shares.reduce((total, share, k) => total + (moving.has(k) ? 0 : share), 0);
  const scale = 1 - (by * moving.size) / others;
  return shares.map((share, k) => (moving.has(k) ? share + by : share * scale));
}

/** One category gives to another; nothing else moves. */
export function transferred(
  shares: readonly number[],
  from: number,
  to: number,
  by: number,
): number[] {
  return shares.map((share, k) => share + (k === to ? by : 0) - (k === from ? by : 0));
}

/** A window of a mix: what one draw of its counts needs. */
export interface Source {
  readonly shares: readonly number[];
  readonly events: number;
  /** Intra-window correlation; 0 for plain multinomial windows. */
  readonly rho: number;
}

/** Counts of one Dirichlet-multinomial window: shares drawn anew, then binomial by binomial. */
export function drawWindow(random: Chance, { shares, events, rho }: Source): number[] {
  const total = (1 - rho) / rho;
  const rates = rho === 0 ? shares : shares.map((share) => random.gamma(total * share));
  let left = rates.reduce((a, b) => a + b, 0);
  let remaining = events;
  const last = rates.length - 1;
  return rates.map((rate, k) => {
    const count = k === last ? remaining : random.binomial(remaining, rate / left);
    left -= rate;
    remaining -= count;
    return count;
  });
}

export function drawWindows(random: Chance, source: Source, count: number): number[][] {
  return Array.from({ length: count }, () => drawWindow(random, source));
}
