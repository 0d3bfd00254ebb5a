import type { Store } from '../../../src/store/store.js';
import type { Alert } from '../../../src/terms/alert.js';
import type { Delivery, Message } from '../../../src/terms/message.js';
import type { DigestEntry } from '../../../src/terms/round.js';

type OutboxPart = Pick<
  Store,
  | 'waitingSenders'
  | 'waiting'
  | 'delivered'
  | 'deliveryFailed'
  | 'deliveryGivenUp'
  | 'digestEntries'
  | 'closeDigest'
  | 'alerts'
>;

/** The outbox part of a store in memory, with a diary of what was done to it. */
export class FakeStore implements OutboxPart {
  queue: Delivery[] = [];
  entries: DigestEntry[] = [];
  known: Alert[] = [];
  readonly delivereds: string[] = [];
  readonly givenUp: { readonly id: string; readonly error: string }[] = [];
  readonly failures: { readonly id: string; readonly nextMs: number; readonly error: string }[] =
    [];

  put(...messages: readonly Message[]): void {
    for (const message of messages) {
      this.queue.push({ message, attempts: 0, nextAttemptMs: message.createdAtMs });
    }
  }

  async waitingSenders(): Promise<readonly string[]> {
    return [...new Set(this.queue.map(({ message }) => message.sender))].sort();
  }

  async waiting(sender: string, limit: number): Promise<readonly Delivery[]> {
    return this.queue
      .filter(({ message }) => message.sender === sender)
      .sort((a, b) => a.message.createdAtMs - b.message.createdAtMs)
      .slice(0, limit);
  }

  async delivered(messageId: string): Promise<void> {
    this.#remove(messageId);
    this.delivereds.push(messageId);
  }

  async deliveryFailed(id: string, nextMs: number, error: string): Promise<void> {
    this.failures.push({ id, nextMs, error });
    this.queue = this.queue.map((delivery) =>
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

  async closeDigest(message: Message, entries: number): Promise<void> {
    const own = this.entries.filter(({ sender }) => sender === message.sender).slice(0, entries);
    this.entries = this.entries.filter((entry) => !own.includes(entry));
    this.put(message);
  }

  async alerts(query: { readonly ids?: readonly string[] }): Promise<readonly Alert[]> {
    return this.known.filter(({ id }) => query.ids?.includes(id) ?? true);
  }

  #remove(id: string): void {
    this.queue = this.queue.filter(({ message }) => message.id !== id);
  }
}
