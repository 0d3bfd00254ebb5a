import { onTestFinished } from 'vitest';
import type { Store } from '../../../src/store/store.js';

/** One store under test, new and empty. */
export interface Opened {
  readonly store: Store;
  /** Closes the store and opens the same one again; null for a form that ends with closing. */
  readonly reopen: (() => Promise<Store>) | null;
  readonly cleanup: () => Promise<void>;
}

export type Open = () => Promise<Opened>;

/** A store for the running test, cleaned up after it. */
export async function begin(open: Open): Promise<Opened> {
  const opened = await open();
  onTestFinished(opened.cleanup);
  return opened;
}

/** The same store after a restart where there can be one; else the one that is open. */
export function restarted({ store, reopen }: Opened): Promise<Store> {
  return reopen === null ? Promise.resolve(store) : reopen();
}
