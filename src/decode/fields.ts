import type { FieldPath } from './types.js';

/** Collects the paths that a collector and its mixes want: each once, with its place. */
export class WantedFields {
  readonly paths: FieldPath[] = [];
  private readonly slots = new Map<string, number>();

  /** The place of the path among the values; the same for every asker. */
  slotOf(path: FieldPath): number {
    const key = JSON.stringify(path);
    const known = this.slots.get(key);
    if (known !== undefined) return known;
    this.paths.push(path);
    this.slots.set(key, this.paths.length - 1);
    return this.paths.length - 1;
  }
}
