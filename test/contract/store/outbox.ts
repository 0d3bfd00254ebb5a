import { expect, it } from 'vitest';
import type { Store } from '../../../src/store/store.js';
import { begin, restarted, type Open } from './opened.js';
import { listOf, message, round, T0 } from './values.js';

async function waitingIds(store: Store, sender: string, limit = 10): Promise<string[]> {
  return (await store.waiting(sender, limit)).map((delivery) => delivery.message.id);
}

export function outboxContract(open: Open): void {
  it('has no sender with messages while it is empty', async () => {
    const { store } = await begin(open);
    expect(await store.waitingSenders()).toEqual([]);
    expect(await store.waiting('oncall', 10)).toEqual([]);
  });

  it("gives a sender's messages in the order of their making, as many as asked for", async () => {
    const { store } = await begin(open);
    const old = message('old', { createdAtMs: T0 - 5 });
    const other = message('other', { sender: 'mail' });
    const messages = [message('b'), other, message('a'), old];
    await store.commitRound(round(0, { messages }));
    expect(await store.waitingSenders()).toEqual(['mail', 'oncall']);
    expect(await waitingIds(store, 'oncall')).toEqual(['old', 'b', 'a']);
    expect(await waitingIds(store, 'oncall', 2)).toEqual(['old', 'b']);
    expect(await waitingIds(store, 'mail')).toEqual(['other']);
  });

  it('keeps the attempts at a failed message and the time of the next one', async () => {
    const opened = await begin(open);
    await opened.store.commitRound(round(0, { messages: [message('m1')] }));
    await opened.store.deliveryFailed('m1', T0 + 100, 'refused: 503');
    await opened.store.deliveryFailed('m1', T0 + 300, 'refused: 503');
    const store = await restarted(opened);
    const delivery = { message: message('m1'), attempts: 2, nextAttemptMs: T0 + 300 };
    expect(await store.waiting('oncall', 10)).toEqual([delivery]);
  });

  it('is rid of a message that was delivered or given up, and counts both', async () => {
    const opened = await begin(open);
    const messages = [message('m1'), message('m2'), message('m3', { sender: 'mail' })];
    await opened.store.commitRound(round(0, { messages }));
    await opened.store.deliveryFailed('m1', T0 + 100, 'no answer');
    await opened.store.delivered('m1');
    await opened.store.delivered('m3');
    await opened.store.deliveryGivenUp('m2', 'refused: 410');
    const store = await restarted(opened);
    expect(await store.waitingSenders()).toEqual([]);
    expect((await store.totals()).deliveries).toEqual([
      { sender: 'mail', outcome: 'delivered', count: 1 },
      { sender: 'oncall', outcome: 'delivered', count: 1 },
      { sender: 'oncall', outcome: 'failed', count: 1 },
      { sender: 'oncall', outcome: 'gave-up', count: 1 },
    ]);
  });

  it('refuses an outcome of a message that does not wait, and counts nothing', async () => {
    const { store } = await begin(open);
    await store.commitRound(round(0, { messages: [message('m1'), message('m2')] }));
    await store.delivered('m1');
    await store.deliveryGivenUp('m2', 'refused: 410');
    const before = await store.totals();
    const refused = /message \w+ does not wait in the outbox/;
    await expect(store.delivered('m1')).rejects.toThrow(refused);
    await expect(store.delivered('m2')).rejects.toThrow(refused);
    await expect(store.deliveryFailed('m3', T0, 'x')).rejects.toThrow(refused);
    await expect(store.deliveryGivenUp('m3', 'x')).rejects.toThrow(refused);
    expect(await store.totals()).toEqual(before);
  });

  it("replaces a sender's first digest entries by the message, and leaves all others", async () => {
    const opened = await begin(open);
    const entry = (sender: string, alertId: string, createdAtMs: number) => {
      return { sender, alertId, event: 'raised', createdAtMs };
    };
    const [one, two] = [entry('mail', 'a2', T0 + 9), entry('mail', 'a1', T0)];
    const other = entry('oncall', 'a1', T0);
    await opened.store.commitRound(round(0, { digestEntries: [one, other] }));
    await opened.store.commitRound(round(1, { digestEntries: [two] }));
    expect(await opened.store.digestEntries('mail')).toEqual([one, two]);
    const digest = message('d1', { sender: 'mail', event: 'digest' });
    await opened.store.closeDigest(digest, 1);
    const store = await restarted(opened);
    expect(await store.digestEntries('mail')).toEqual([two]);
    expect(await store.digestEntries('oncall')).toEqual([other]);
    expect(await waitingIds(store, 'mail')).toEqual(['d1']);
  });

  it('keeps the digest entries when their message cannot be stored', async () => {
    const { store } = await begin(open);
    const entry = { sender: 'mail', alertId: 'a1', event: 'raised', createdAtMs: T0 };
    const taken = message('d1', { sender: 'mail' });
    await store.commitRound(round(0, { digestEntries: [entry], messages: [taken] }));
    await expect(store.closeDigest(taken, 1)).rejects.toThrow(
      /message d1 to mail is in the outbox/,
    );
    expect(await store.digestEntries('mail')).toEqual([entry]);
    expect(await listOf(store.batches())).toHaveLength(1);
  });

  it('keeps the name it was given when it was made', async () => {
    const opened = await begin(open);
    const name = await opened.store.instanceId();
    expect(name).toMatch(/^[0-9a-f]{32}$/);
    const store = await restarted(opened);
    expect(await store.instanceId()).toBe(name);
  });

  it('grows with what is stored', async () => {
    const { store } = await begin(open);
    const before = await store.bytes();
    await store.keepConfig('digest', 'x'.repeat(1_000_000));
    expect(await store.bytes()).toBeGreaterThan(before + 900_000);
  });
}
