import type { Clock } from '../clock/clock.js';
import type { SenderConfig } from '../config/types.js';
import type { Store } from '../store/store.js';
import type { Delivery } from '../terms/message.js';
import { giveUpAfterMs, retryDelayMs } from './backoff.js';
import type { Post } from './post.js';
import { pendingBySender } from './pending.js';
import type { SenderQueue } from './pending.js';
import { sendWebhook } from './webhook.js';

export type OutboxStore = Pick<
  Store,
  'waitingSenders' | 'waiting' | 'delivered' | 'deliveryFailed' | 'deliveryGivenUp'
>;

export interface OutboxPorts {
  readonly store: OutboxStore;
  readonly senders: readonly SenderConfig[];
  /** URI reference of the instance: the CloudEvents `source`, constant for a store's life. */
  readonly source: string;
  readonly clock: Clock;
  readonly post: Post;
  /** In [0, 1), for the jitter of retries. */
  readonly random: () => number;
}

export interface DeliveryReport {
  readonly delivered: number;
  readonly failed: number;
  readonly gaveUp: number;
  /**
   * Real time at which calling again can do something; null when nothing waits. Use this and not
   * the store's earliest attempt: messages behind a failing one are due all the time.
   */
  readonly nextMs: number | null;
}

const maxInFlight = 8;
/** A slow but working sender makes way after this long; its rest follows in the next call. */
const turnMs = 10_000;
/** Least pause of a sender that failed, whatever is next in its queue. */
const pauseAfterFailureMs = 5_000;

/**
 * Sends what is due and records how it went. Each sender's messages go in order, one at a time, and
 * wait behind the first that fails; senders do not wait for each other. At least once: a message
 * whose answer was lost is sent again under the same id. Never run two calls at the same time.
 *
 * @throws StoreError when the store refuses; the other senders' turns are finished first.
 */
export async function deliverDue(ports: OutboxPorts): Promise<DeliveryReport> {
  const queues = await pendingBySender(ports.store, ports.senders);
  const reports: DeliveryReport[] = [];
  const waiting = [...queues];
  const worker = async (): Promise<void> => {
    for (let queue = waiting.shift(); queue !== undefined; queue = waiting.shift()) {
      reports.push(await takeTurn(queue, ports));
    }
  };
  const ends = await Promise.allSettled(Array.from({ length: maxInFlight }, worker));
  for (const end of ends) if (end.status === 'rejected') throw end.reason;
  return reports.reduce(sum, { delivered: 0, failed: 0, gaveUp: 0, nextMs: null });
}

async function takeTurn(queue: SenderQueue, ports: OutboxPorts): Promise<DeliveryReport> {
  const { sender } = queue;
  if (sender === null) return dropOrphans(queue, ports.store);
  const turnEndMs = ports.clock.nowMs() + turnMs;
  let delivered = 0;
  for (const delivery of queue.deliveries) {
    const nowMs = ports.clock.nowMs();
    const isTurnOver = nowMs >= turnEndMs;
    if (isTurnOver || delivery.nextAttemptMs > nowMs) {
      const nextMs = Math.max(delivery.nextAttemptMs, nowMs);
      return { delivered, failed: 0, gaveUp: 0, nextMs };
    }
    const result = await sendWebhook(delivery.message, { ...ports, sender, nowMs });
    if (result.kind === 'failed') {
      return { ...(await recordFailure(delivery, result, ports)), delivered };
    }
    await ports.store.delivered(delivery.message.id);
    delivered += 1;
  }
  const nextMs = queue.mayHoldMore ? ports.clock.nowMs() : null;
  return { delivered, failed: 0, gaveUp: 0, nextMs };
}

async function recordFailure(
  delivery: Delivery,
  result: { readonly error: string; readonly retryAfterMs: number | null },
  ports: OutboxPorts,
): Promise<DeliveryReport> {
  const { id, createdAtMs } = delivery.message;
  const nowMs = ports.clock.nowMs();
  const lastAttemptMs = createdAtMs + giveUpAfterMs;
  if (nowMs >= lastAttemptMs) {
    await ports.store.deliveryGivenUp(id, result.error);
    return { delivered: 0, failed: 0, gaveUp: 1, nextMs: nowMs + pauseAfterFailureMs };
  }
  const waitMs = Math.max(
    retryDelayMs(delivery.attempts, ports.random()),
    result.retryAfterMs ?? 0,
  );
  // The last attempt falls on the day's end, not anywhere in the last quarter of an hour.
  const nextMs = Math.min(nowMs + waitMs, lastAttemptMs);
  await ports.store.deliveryFailed(id, nextMs, result.error);
  return { delivered: 0, failed: 1, gaveUp: 0, nextMs };
}

async function dropOrphans(queue: SenderQueue, store: OutboxStore): Promise<DeliveryReport> {
  for (const { message } of queue.deliveries) {
    const error = `the configuration has no sender ${message.sender} any more`;
    await store.deliveryGivenUp(message.id, error);
  }
  return { delivered: 0, failed: 0, gaveUp: queue.deliveries.length, nextMs: null };
}

function sum(a: DeliveryReport, b: DeliveryReport): DeliveryReport {
  const times = [a.nextMs, b.nextMs].filter((time) => time !== null);
  return {
    delivered: a.delivered + b.delivered,
    failed: a.failed + b.failed,
    gaveUp: a.gaveUp + b.gaveUp,
    nextMs: times.length === 0 ? null : Math.min(...times),
  };
}
