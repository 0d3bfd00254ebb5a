import { chance, grouped, percent, points } from '../alert/words.js';
import type { Comparison, Mover } from '../terms/evidence.js';

/** Categories listed before the rest is only counted. */
const LISTED = 20;

/** A comparison in words, the table's movers below. */
export function weighText(comparison: Comparison): string {
  const { moved, movers, pooled, trend } = comparison;
  const more = movers.length - LISTED;
  return [
    `${percent(moved.estimate)} of events moved to another category ` +
      `(at least ${percent(moved.atLeast)}, at most ${percent(moved.atMost)})`,
    `by chance alone: ${chance(comparison.logP, 'comparisons')} (${methodText(comparison)})`,
    ...(trend === undefined
      ? []
      : [`a trend along the order, by chance alone: ${chance(trend.logP, 'comparisons')}`]),
    ...movers.slice(0, LISTED).map(moverLine),
    ...(more > 0 ? [`  and ${grouped(more)} more`] : []),
    ...(pooled.length > 0 ? [`put together: ${pooled.join(', ')}`] : []),
  ].join('\n');
}

function moverLine(m: Mover): string {
  const [low, high] = m.interval;
  return (
    `  ${m.blamed ? '*' : ' '} ${m.category}: ${percent(m.before)} before, ` +
    `${percent(m.after)} after, ${points(m.difference)} (${points(low)} to ${points(high)})`
  );
}

function methodText(c: Comparison): string {
  const p = `p = ${figure(c.p)}`;
  switch (c.method) {
    case 'g2-f':
      return `F = ${figure(c.statistic)}, df ${figure(c.df)} and ${figure(c.df2 ?? null)}, ${p}`;
    case 'pearson':
    case 'goodness-of-fit':
      return `chi-squared ${figure(c.statistic)}, df ${figure(c.df)}, ${p}`;
    case 'exact':
      return `exact, ${p}`;
    case 'monte-carlo':
      return `sampled tables, ${p}`;
  }
}

function figure(value: number | null): string {
  if (value === null) return 'infinite';
  return String(Number(value.toPrecision(4)));
}
