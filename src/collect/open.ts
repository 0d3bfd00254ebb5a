import type { Collector } from './collector.js';
import type { CollectorOptions } from './options.js';
import { Stdin } from './stdin.js';
import { Tail } from './tail/tail.js';

/**
 * Opens a configured collector where its stored partitions left off.
 *
 * @throws Error when it reads the standard input and none was passed in; StoreError from the store.
 * Files that are missing or unreadable are no errors: `problems()` tells of them.
 */
export async function openCollector(options: CollectorOptions): Promise<Collector> {
  const { config, stdin } = options;
  if (config.source.kind === 'tail') return Tail.open(options, config.source.paths);
  if (stdin === undefined) {
    throw new Error(`collector ${config.name} reads the standard input, but there is none here`);
  }
  return Stdin.open(options, stdin);
}
