import type { SenderConfig } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { Delivery } from '../terms/message.js';

/** What waits for one sender, in the order in which it must arrive. */
export interface SenderQueue {
  readonly name: string;
  /** null when the configuration does not know the sender any more. */
  readonly sender: SenderConfig | null;
  readonly deliveries: readonly Delivery[];
  /** The outbox holds more than was read, perhaps for this sender. */
  readonly mayHoldMore: boolean;
}

const firstLimit = 64;
const maxLimit = 1_024;

/**
 * Reads the outbox, due or not, until every sender's first message is seen: only with its first
 * message can a sender's turn be decided, and a long queue of one must not hide the others.
 * Reads 64 messages, or up to 1,024 where a sender has none among them.
 */
export async function pendingBySender(
  store: Pick<Store, 'dueDeliveries'>,
  senders: readonly SenderConfig[],
): Promise<readonly SenderQueue[]> {
  for (let limit = firstLimit; ; limit *= 4) {
    const deliveries = await store.dueDeliveries(Number.MAX_SAFE_INTEGER, limit);
    const isAll = deliveries.length < limit;
    const queues = queuesOf(deliveries, { senders, mayHoldMore: !isAll });
    const isSeen = senders.every(({ name }) => queues.some((queue) => queue.name === name));
    if (isAll || isSeen || limit >= maxLimit) return queues;
  }
}

function queuesOf(
  deliveries: readonly Delivery[],
  options: { readonly senders: readonly SenderConfig[]; readonly mayHoldMore: boolean },
): readonly SenderQueue[] {
  // The sort is stable: messages made at the same instant stay in the order of the outbox.
  const inOrder = [...deliveries].sort((a, b) => a.message.createdAtMs - b.message.createdAtMs);
  const byName = new Map<string, Delivery[]>();
  for (const delivery of inOrder) {
    const queue = byName.get(delivery.message.sender);
    if (queue === undefined) byName.set(delivery.message.sender, [delivery]);
    else queue.push(delivery);
  }
  return [...byName].map(([name, items]) => ({
    name,
    sender: options.senders.find((sender) => sender.name === name) ?? null,
    deliveries: items,
    mayHoldMore: options.mayHoldMore,
  }));
}
