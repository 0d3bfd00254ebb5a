import { requireInteger } from './preconditions.js';

/** Refuses an index of the pooled bin that is not one of the bins; null means there is none. */
export function requirePooledIndex(index: number | null, bins: number): void {
  if (index !== null) requireInteger('pooledIndex', index, 0, bins - 1);
}
