import { expect } from 'vitest';

import { outcome, tableOf } from './figures.js';
import type { Figure } from './figures.js';

/** Prints a table, with the time it took, and fails naming each goal that was missed. */
export function report(title: string, measure: () => readonly Figure[]): void {
  const startMs = Date.now();
  const figures = measure();
  const seconds = ((Date.now() - startMs) / 1000).toFixed(0);
  console.log(`\n${tableOf(`${title} (${seconds} s)`, figures)}`);
  const missed = figures.filter((figure) => outcome(figure) === 'MISSED');
  expect(missed.map((figure) => figure.what)).toEqual([]);
}
