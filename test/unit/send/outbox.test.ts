import { describe, expect, it } from 'vitest';

import { giveUpAfterMs } from '../../../src/send/backoff.js';
import { deliverDue } from '../../../src/send/outbox.js';
import type { OutboxPorts } from '../../../src/send/outbox.js';
import type { PostResult } from '../../../src/send/post.js';
import { FakeStore } from './fakeStore.js';
import { sampleMessage, sampleSender, startMs } from './samples.js';

const oncall = sampleSender();
const archive = sampleSender({ name: 'archive', webhook: 'http://127.0.0.1:9/archive' });

/** Ports whose receiver answers by a rule on the address and the message's id. */
function ports(
  store: FakeStore,
  answer: (url: string, id: string) => number,
  changes: Partial<OutboxPorts> = {},
): OutboxPorts & { readonly posted: string[] } {
  const posted: string[] = [];
  return {
    store,
    senders: [oncall, archive],
    source: 'urn:example:tallyward',
    clock: { nowMs: () => startMs },
    post: async (url, _headers, body): Promise<PostResult> => {
      const { id } = JSON.parse(body) as { readonly id: string };
      posted.push(id);
      return { status: answer(url, id), retryAfter: null };
    },
    random: () => 0,
    ...changes,
    posted,
  };
}

function fill(store: FakeStore, sender: string, count: number): void {
  for (let i = 0; i < count; i += 1) {
    store.put(sampleMessage({ id: `${sender}-${i}`, sender, createdAtMs: startMs - count + i }));
  }
}

describe('delivering what is due', () => {
  it('sends nothing and names no next time when the outbox is empty', async () => {
    const report = await deliverDue(ports(new FakeStore(), () => 200));
    expect(report).toEqual({ delivered: 0, failed: 0, gaveUp: 0, nextMs: null });
  });

  it('delivers every message of a sender in the order of their making', async () => {
    const store = new FakeStore();
    store.put(
      sampleMessage({ id: 'later', createdAtMs: startMs - 1 }),
      sampleMessage({ id: 'first', createdAtMs: startMs - 3 }),
      sampleMessage({ id: 'second', createdAtMs: startMs - 3 }),
    );
    const report = await deliverDue(ports(store, () => 204));
    expect(store.delivereds).toEqual(['first', 'second', 'later']);
    expect(report).toEqual({ delivered: 3, failed: 0, gaveUp: 0, nextMs: null });
  });

  it('lets messages of a sender wait behind one that failed, also in the next call', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 3);
    const first = ports(store, () => 503);
    const report = await deliverDue(first);
    expect(first.posted).toEqual(['oncall-0']);
    expect(store.failures).toEqual([
      { id: 'oncall-0', nextMs: startMs + 2500, error: 'the receiver answered HTTP 503' },
    ]);
    expect(report.nextMs).toBe(startMs + 2500);
    const again = ports(store, () => 200);
    expect(await deliverDue(again)).toMatchObject({ delivered: 0, nextMs: startMs + 2500 });
    expect(again.posted).toEqual([]);
  });

  it('delivers in the same order once the first message of the sender gets through', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 3);
    await deliverDue(ports(store, () => 503));
    await deliverDue(ports(store, () => 200, { clock: { nowMs: () => startMs + 2500 } }));
    expect(store.delivereds).toEqual(['oncall-0', 'oncall-1', 'oncall-2']);
  });

  it('delivers to a healthy sender behind a long queue of a failing one', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 300);
    fill(store, 'archive', 2);
    const outcome = await deliverDue(ports(store, (url) => (url.endsWith('/hook') ? 500 : 200)));
    expect(store.delivereds).toEqual(['archive-0', 'archive-1']);
    expect(outcome).toMatchObject({ delivered: 2, failed: 1 });
  });

  it('asks to be called again at once when the outbox holds more than one reading', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 65);
    const only = { senders: [oncall] };
    const report = await deliverDue(ports(store, () => 200, only));
    expect(report).toMatchObject({ delivered: 64, nextMs: startMs });
    expect(await deliverDue(ports(store, () => 200, only))).toMatchObject({
      delivered: 1,
      nextMs: null,
    });
  });

  it('has at most eight posts under way at a time when more senders have messages', async () => {
    const store = new FakeStore();
    const senders = Array.from({ length: 12 }, (_, i) => sampleSender({ name: `s${i}` }));
    for (const { name } of senders) fill(store, name, 2);
    let underWay = 0;
    let most = 0;
    const post = async (): Promise<PostResult> => {
      underWay += 1;
      most = Math.max(most, underWay);
      await new Promise((resolve) => setImmediate(resolve));
      underWay -= 1;
      return { status: 200, retryAfter: null };
    };
    const report = await deliverDue(ports(store, () => 200, { senders, post }));
    expect(report.delivered).toBe(24);
    expect(most).toBe(8);
  });

  it('ends the turn of a slow sender after ten seconds and leaves the rest due', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 4);
    let nowMs = startMs;
    const slow = ports(
      store,
      () => {
        nowMs += 6_000;
        return 200;
      },
      { clock: { nowMs: () => nowMs } },
    );
    const report = await deliverDue(slow);
    expect(report).toMatchObject({ delivered: 2, nextMs: startMs + 12_000 });
  });
});

describe('failing', () => {
  it('waits longer when the receiver asks for it, and no less than the backoff', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 1);
    fill(store, 'archive', 1);
    const post = async (url: string): Promise<PostResult> => ({
      status: 429,
      retryAfter: url.endsWith('/hook') ? '120' : '1',
    });
    await deliverDue(ports(store, () => 429, { post }));
    expect(Object.fromEntries(store.failures.map(({ id, nextMs }) => [id, nextMs]))).toEqual({
      'oncall-0': startMs + 120_000,
      'archive-0': startMs + 2_500,
    });
  });

  it('records the reason when the post itself fails', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 1);
    const post = async (): Promise<PostResult> => {
      throw new Error('connect ECONNREFUSED 127.0.0.1:9');
    };
    await deliverDue(ports(store, () => 200, { post }));
    expect(store.failures[0]?.error).toBe('connect ECONNREFUSED 127.0.0.1:9');
  });

  it('makes the last attempt 24 h after the message was made', async () => {
    const store = new FakeStore();
    const createdAtMs = startMs - giveUpAfterMs + 1_000;
    store.put(sampleMessage({ createdAtMs }));
    await deliverDue(ports(store, () => 500));
    expect(store.failures[0]?.nextMs).toBe(createdAtMs + giveUpAfterMs);
    expect(store.givenUp).toEqual([]);
  });

  it('gives up when that attempt fails, and pauses before the next message', async () => {
    const store = new FakeStore();
    store.put(sampleMessage({ createdAtMs: startMs - giveUpAfterMs }));
    store.put(sampleMessage({ id: 'next' }));
    const report = await deliverDue(ports(store, () => 500));
    expect(store.givenUp).toEqual([{ id: 'message-1', error: 'the receiver answered HTTP 500' }]);
    expect(report).toEqual({ delivered: 0, failed: 0, gaveUp: 1, nextMs: startMs + 5_000 });
  });

  it('still tries a message once that became too old while the daemon was down', async () => {
    const store = new FakeStore();
    store.put(sampleMessage({ createdAtMs: startMs - 3 * giveUpAfterMs }));
    await deliverDue(ports(store, () => 200));
    expect(store.delivereds).toEqual(['message-1']);
  });

  it('gives up what is for a sender that the configuration no longer has', async () => {
    const store = new FakeStore();
    fill(store, 'gone', 2);
    const report = await deliverDue(ports(store, () => 200));
    expect(report).toEqual({ delivered: 0, failed: 0, gaveUp: 2, nextMs: null });
    expect(store.givenUp[0]?.error).toBe('the configuration has no sender gone any more');
  });

  it('finishes the other senders and then throws when the store refuses', async () => {
    const store = new FakeStore();
    fill(store, 'oncall', 1);
    fill(store, 'archive', 1);
    const recordDelivered = store.delivered.bind(store);
    store.delivered = async (id) => {
      if (id === 'oncall-0') throw new Error('disk full');
      await recordDelivered(id);
    };
    await expect(deliverDue(ports(store, () => 200))).rejects.toThrow('disk full');
    expect(store.delivereds).toEqual(['archive-0']);
  });
});
