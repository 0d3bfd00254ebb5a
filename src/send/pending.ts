import type { SenderConfig } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { Delivery } from '../terms/message.js';

/** What waits for one sender, in the order in which it must arrive. */
export interface SenderQueue {
  /** null when the configuration does not know the sender any more. */
  readonly sender: SenderConfig | null;
  readonly deliveries: readonly Delivery[];
  /** More waits than was read. */
  readonly mayHoldMore: boolean;
}

/** Messages read for one turn of a sender. */
const READ_AT_ONCE = 64;

/** Reads the beginning of every sender's queue, due or not: only its first message can be next. */
export async function pendingBySender(
  store: Pick<Store, 'waitingSenders' | 'waiting'>,
  senders: readonly SenderConfig[],
): Promise<readonly SenderQueue[]> {
  const queues: SenderQueue[] = [];
  for (const name of await store.waitingSenders()) {
    const deliveries = await store.waiting(name, READ_AT_ONCE);
    const sender = senders.find((known) => known.name === name) ?? null;
    queues.push({ sender, deliveries, mayHoldMore: deliveries.length === READ_AT_ONCE });
  }
  return queues;
}
