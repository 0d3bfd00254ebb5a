import { afterEach, beforeEach, describe, expect, it } from 'vitest';

import { closeDigests } from '../../../src/send/digest.js';
import { deliverDue } from '../../../src/send/outbox.js';
import type { Post } from '../../../src/send/post.js';
import { openSqliteStore } from '../../../src/store/sqlite/open.js';
import type { Store } from '../../../src/store/store.js';
import type { RoundCommit } from '../../../src/terms/round.js';
import { sampleAlert, sampleMessage, sampleSender, startMs } from './samples.js';

let store: Store;

beforeEach(async () => {
  store = await openSqliteStore({ path: ':memory:' });
});

afterEach(async () => {
  await store.close();
});

function round(changes: Partial<RoundCommit>): RoundCommit {
  return {
    batch: { endMs: startMs + 300_000, number: 0, mixes: ['gateway-outcomes'], families: [] },
    verdicts: [],
    strands: [],
    forgotten: [],
    alerts: [sampleAlert()],
    messages: [],
    digestEntries: [],
    ...changes,
  };
}

async function deliver(status: number, nowMs: number): Promise<readonly string[]> {
  const posted: string[] = [];
  const post: Post = async (_url, _headers, body) => {
    posted.push(body);
    return { status, retryAfter: null };
  };
  const clock = { nowMs: () => nowMs };
  const senders = [sampleSender()];
  await deliverDue({ store, senders, source: 'urn:example:t', clock, post, random: () => 0 });
  return posted;
}

describe('the outbox over the real store', () => {
  it('sends the same bytes again after a failure, and then nothing any more', async () => {
    await store.commitRound(round({ messages: [sampleMessage()] }));
    const first = await deliver(503, startMs);
    expect(await deliver(200, startMs + 2_499)).toEqual([]);
    const second = await deliver(200, startMs + 2_500);
    expect(first).toHaveLength(1);
    expect(second).toEqual(first);
    expect(await deliver(200, startMs + 60_000)).toEqual([]);
    expect((await store.totals()).deliveries).toEqual([
      { sender: 'oncall', outcome: 'delivered', count: 1 },
      { sender: 'oncall', outcome: 'failed', count: 1 },
    ]);
  });

  it('sends a digest as soon as it is closed', async () => {
    const entry = { sender: 'oncall', alertId: 'alert-1', event: 'raised', createdAtMs: startMs };
    await store.commitRound(round({ digestEntries: [entry] }));
    const clock = { nowMs: () => startMs + 5 };
    await closeDigests({ store, senders: [sampleSender()], clock, caughtUp: true });
    const posted = await deliver(200, startMs + 5);
    expect(posted).toHaveLength(1);
    const event = JSON.parse(posted[0] ?? '') as {
      readonly type: string;
      readonly data: { readonly summary: string };
    };
    expect(event.type).toBe('tallyward.digest');
    expect(event.data.summary).toMatch(/^while Tallyward was away: 1 shift, 1 still open\n/);
    expect(await store.digestEntries('oncall')).toEqual([]);
  });
});
