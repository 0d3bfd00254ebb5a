import { requireLength } from './preconditions.js';

/** Refuses scores of ordered categories that are not `length` finite numbers. */
export function requireScores(name: string, scores: readonly number[], length: number): void {
  requireLength(name, scores, length);
  scores.forEach((score, index) => {
    if (!Number.isFinite(score)) {
      throw new RangeError(`${name}[${index}]: must be a finite number, got ${score}`);
    }
  });
}
