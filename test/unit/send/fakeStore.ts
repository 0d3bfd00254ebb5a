import type { Store } from '../../../src/store/store.js';
import type { Alert } from '../../../src/terms/alert.js';
import type { Delivery, Message } from '../../../src/terms/message.js';
import type { DigestEntry } from '../../../src/terms/round.js';

type OutboxPart = Pick<
  Store,
  | 'dueDeliveries'
  | 'delivered'
  | 'deliveryFailed'
  | 'deliveryGivenUp'
  | 'digestEntries'
  | 'closeDigest'
  | 'alerts'
>;

/** The outbox part of a store in memory, with a diary of what was done to it. */
export class FakeStore implements OutboxPart {
  waiting: Delivery[] = [];
  entries: DigestEntry[] = [];
  known: Alert[] = [];
  readonly delivereds: string[] = [];
  readonly givenUp: { readonly id: string; readonly error: string }[] = [];
  readonly failures: { readonly id: string; readonly nextMs: number; readonly error: string }[] =
    [];

  put(...messages: readonly Message[]): void {
    for (const message of messages) {
      this.waiting.push({ message, attempts: 0, nextAttemptMs: message.createdAtMs });
    }
  }

  async dueDeliveries(nowMs: number, limit: number): Promise<readonly Delivery[]> {
    return this.waiting.filter(({ nextAttemptMs }) => nextAttemptMs <= nowMs).slice(0, limit);
  }

  async delivered(messageId: string): Promise<void> {
    this.#remove(messageId);
    this.delivereds.push(messageId);
  }

  async deliveryFailed(id: string, nextMs: number, error: string): Promise<void> {
    this.failures.push({ id, nextMs, error });
    this.waiting = this.waiting.map((delivery) =>
      delivery.message.id === id
        ? { ...delivery, attempts: delivery.attempts + 1, nextAttemptMs: nextMs }
        : delivery,
    );
  }

  async deliveryGivenUp(id: string, error: string): Promise<void> {
    this.#remove(id);
    this.givenUp.push({ id, error });
  }

  async digestEntries(sender: string): Promise<readonly DigestEntry[]> {
    return this.entries.filter((entry) => entry.sender === sender);
  }

  async closeDigest(message: Message): Promise<void> {
    this.entries = this.entries.filter(({ sender }) => sender !== message.sender);
    this.put(message);
  }

  async alerts(query: { readonly ids?: readonly string[] }): Promise<readonly Alert[]> {
    return this.known.filter(({ id }) => query.ids?.includes(id) ?? true);
  }

  #remove(id: string): void {
    this.waiting = this.waiting.filter(({ message }) => message.id !== id);
  }
}
