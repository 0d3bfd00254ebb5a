import { describe, expect, it } from 'vitest';

import { closeDigests } from '../../../src/send/digest.js';
import type { DigestEntry } from '../../../src/terms/round.js';
import { FakeStore } from './fakeStore.js';
import { sampleAlert, sampleSender, startMs } from './samples.js';

const sender = sampleSender({ digestMs: 3_600_000 });

function entry(alertId: string, changes: Partial<DigestEntry> = {}): DigestEntry {
  return { sender: 'oncall', alertId, event: 'raised', createdAtMs: startMs, ...changes };
}

async function close(store: FakeStore, nowMs: number, caughtUp = false): Promise<number | null> {
  return closeDigests({ store, senders: [sender], clock: { nowMs: () => nowMs }, caughtUp });
}

/** A store with alerts a-000, a-001 ... of which every second has ended. */
function storeWith(count: number): FakeStore {
  const store = new FakeStore();
  for (let i = 0; i < count; i += 1) {
    const id = `a-${String(i).padStart(3, '0')}`;
    const state = i % 2 === 0 ? 'unacknowledged' : 'normal';
    store.known.push(sampleAlert({ id, state, sentence: `sentence ${id}` }));
    store.entries.push(entry(id, { createdAtMs: startMs + i }));
  }
  return store;
}

describe('closing digests', () => {
  it('does nothing and names no time when no entry waits', async () => {
    const store = new FakeStore();
    expect(await close(store, startMs)).toBeNull();
    expect(store.queue).toEqual([]);
  });

  it('keeps the entries until the sender’s digest time after the first is over', async () => {
    const store = storeWith(3);
    expect(await close(store, startMs + 3_599_999)).toBe(startMs + 3_600_000);
    expect(store.entries).toHaveLength(3);
    expect(await close(store, startMs + 3_600_000)).toBeNull();
    expect(store.entries).toEqual([]);
  });

  it('closes at once when catching up has just ended', async () => {
    const store = storeWith(3);
    expect(await close(store, startMs + 10, true)).toBeNull();
    expect(store.queue.map(({ message }) => message.event)).toEqual(['digest']);
  });

  it('counts what was raised and what is still open, and lists a sentence an alert', async () => {
    const store = storeWith(3);
    store.entries.push(entry('a-001', { event: 'returned', createdAtMs: startMs + 9 }));
    await close(store, startMs + 10, true);
    const message = store.queue[0]?.message;
    expect(message?.summary.split('\n')).toEqual([
      'while Tallyward was away: 3 shifts, 2 still open',
      'sentence a-000',
      'sentence a-001',
      'sentence a-002',
    ]);
    expect(message?.createdAtMs).toBe(startMs + 10);
  });

  it('says one shift in the singular', async () => {
    const store = storeWith(1);
    await close(store, startMs, true);
    expect(store.queue[0]?.message.summary).toMatch(/away: 1 shift, 1 still open\n/);
  });

  it('lists fifty alerts and counts the others when there are more', async () => {
    const store = storeWith(253);
    await close(store, startMs, true);
    const message = store.queue[0]?.message;
    const lines = message?.summary.split('\n') ?? [];
    expect(lines[0]).toBe('while Tallyward was away: 253 shifts, 127 still open');
    expect(lines).toHaveLength(52);
    expect(lines[50]).toBe('sentence a-049');
    expect(lines[51]).toBe('and 203 more');
    expect(message?.alerts).toHaveLength(50);
  });

  it('gives the same id whatever the order of the entries and the time of closing', async () => {
    const stores = [storeWith(5), storeWith(5)];
    stores[1]?.entries.reverse();
    for (const [i, store] of stores.entries()) await close(store, startMs + i, true);
    const ids = stores.map((store) => store.queue[0]?.message.id);
    expect(ids[0]).toMatch(/^digest-[0-9a-f]{32}$/);
    expect(ids[1]).toBe(ids[0]);
  });

  it('gives another id when the first entry is another', async () => {
    const stores = [storeWith(2), storeWith(2)];
    if (stores[1] !== undefined) stores[1].entries = [entry('a-001')];
    for (const store of stores) await close(store, startMs, true);
    const ids = stores.map((store) => store.queue[0]?.message.id);
    expect(ids[1]).not.toBe(ids[0]);
  });
});
