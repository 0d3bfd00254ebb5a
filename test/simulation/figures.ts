/** What a figure must be, and how it is written. */
export type Goal =
  | { readonly atMost: number }
  | { readonly atLeast: number }
  | { readonly near: number; readonly within: number };

/** One measured figure beside its goal. */
export interface Figure {
  readonly what: string;
  readonly measured: number;
  /** Standard error of `measured`. */
  readonly error: number;
  readonly goal: Goal;
  /** The figure of the design's own run, where there is one. */
  readonly design?: string;
}

/** Standard errors by which a figure may miss its goal and still be called undecided. */
const UNDECIDED_ERRORS = 2;

export type Outcome = 'met' | 'undecided' | 'MISSED';

/** How far beyond its goal a figure lies; 0 or less when the goal is met. */
function beyond({ measured, goal }: Figure): number {
  if ('atMost' in goal) return measured - goal.atMost;
  if ('atLeast' in goal) return goal.atLeast - measured;
  return Math.abs(measured - goal.near) - goal.within;
}

/** `met` as measured; beyond the goal by no more than so many standard errors is `undecided`. */
export function outcome(figure: Figure, undecidedErrors = UNDECIDED_ERRORS): Outcome {
  const excess = beyond(figure);
  if (excess <= 0) return 'met';
  return excess <= undecidedErrors * figure.error ? 'undecided' : 'MISSED';
}

/** The figures as a table: a line each, under a heading. */
export function tableOf(title: string, figures: readonly Figure[]): string {
  const head = ['', 'measured', 's.e.', 'goal', 'design', ''];
  const rows = figures.map((figure) => [
    figure.what,
    short(figure.measured),
    short(figure.error),
    goalText(figure.goal),
    figure.design ?? '',
    outcome(figure),
  ]);
  const widths = head.map((_, at) => Math.max(...[head, ...rows].map((row) => row[at].length)));
  const line = (row: readonly string[]): string =>
    row
      .map((cell, at) => cell.padEnd(widths[at]))
      .join('  ')
      .trimEnd();
  return [title, ...[head, ...rows].map(line)].join('\n');
}

function goalText(goal: Goal): string {
  if ('atMost' in goal) return `<= ${short(goal.atMost)}`;
  if ('atLeast' in goal) return `>= ${short(goal.atLeast)}`;
  return `${short(goal.near)} +- ${short(goal.within)}`;
}

function short(x: number): string {
  return x !== 0 && Math.abs(x) < 0.001 ? x.toExponential(1) : String(Number(x.toPrecision(3)));
}

/** A share of independent trials with its standard error; at no success that of half a one. */
export function rate(hits: number, trials: number): { measured: number; error: number } {
  const p = hits / trials;
  const floor = Math.min(0.5, 0.5 / trials);
  const safe = Math.min(1 - floor, Math.max(floor, p));
  return { measured: p, error: Math.sqrt((safe * (1 - safe)) / trials) };
}

/** A mean with its standard error. */
export function mean(values: readonly number[]): { measured: number; error: number } {
  const measured = values.reduce((a, b) => a + b, 0) / values.length;
  const squares = values.reduce((total, x) => total + (x - measured) ** 2, 0);
  return { measured, error: Math.sqrt(squares / (values.length - 1) / values.length) };
}

/**
 * A share of trials that come in clusters of `each`, with the standard error between clusters.
 * No hit at all says nothing about the spread: then the error is that of half a hit.
 */
export function overClusters(
  hits: readonly number[],
  each: number,
): { measured: number; error: number } {
  const tests = hits.length * each;
  const measured = hits.reduce((a, b) => a + b, 0) / tests;
  const { error } = mean(hits.map((hit) => hit / each));
  return { measured, error: Math.max(error, Math.sqrt(0.5) / tests) };
}
