import { expect, it } from 'vitest';
import type { RoundCommit } from '../../../src/terms/round.js';
import type { Store } from '../../../src/store/store.js';
import { begin, restarted, type Open } from './opened.js';
import { alert, listOf, memory, message, MINUTE, round, T0, verdict } from './values.js';

const entry = { sender: 'mail', alertId: 'a1', event: 'raised', createdAtMs: T0 };

function fullRound(at: number): RoundCommit {
  return round(at, {
    verdicts: [verdict(at), verdict(at, { strand: 'r=north', verdict: 'shifted' })],
    strands: [
      { mix: 'm', strand: 'r=north', state: { ...memory, lastMs: T0 + at } },
      { mix: 'm', strand: 'all', state: memory },
    ],
    alerts: [alert(`a${at}`, { strand: 'r=north' })],
    messages: [message(`m${at}`)],
    digestEntries: [entry],
  });
}

/** All that rounds leave behind. */
async function everything(store: Store): Promise<unknown> {
  return {
    verdicts: await listOf(store.verdicts({})),
    latest: await store.latestVerdicts(),
    batches: await listOf(store.batches()),
    states: await store.strandStates(),
    judgedTo: await store.judgedTo(),
    alerts: await store.alerts({}),
    waiting: await store.waiting('oncall', 100),
    digest: await store.digestEntries('mail'),
    totals: await store.totals(),
  };
}

export function roundsContract(open: Open): void {
  it('keeps all that a round leaves behind, also over a restart', async () => {
    const opened = await begin(open);
    const given = fullRound(0);
    await opened.store.commitRound(given);
    const store = await restarted(opened);
    expect(await listOf(store.verdicts({}))).toEqual(given.verdicts);
    expect(await listOf(store.batches())).toEqual([given.batch]);
    expect(await store.strandStates()).toEqual([...given.strands].reverse());
    expect(await store.alerts({})).toEqual(given.alerts);
    expect(await store.digestEntries('mail')).toEqual([entry]);
    const delivery = { message: given.messages[0], attempts: 0, nextAttemptMs: T0 };
    expect(await store.waiting(given.messages[0]?.sender ?? '', 10)).toEqual([delivery]);
    expect(await store.judgedTo()).toEqual(new Map([['m', T0 + MINUTE]]));
  });

  it.each<[string, Partial<RoundCommit>, RegExp]>([
    ['a verdict twice', { verdicts: [verdict(1), verdict(1)] }, /already has a verdict/],
    ['a verdict of before', { verdicts: [verdict(0)] }, /window that ends at 2031-03-05T00:01:00/],
    ['a batch of before', { batch: round(0).batch }, /batch 0 of the round that ends at 2031/],
    ['a message of before', { messages: [message('m0')] }, /message m0 to oncall is in the outbox/],
    [
      'a time that is none',
      { digestEntries: [{ ...entry, createdAtMs: NaN }] },
      /digest entry of alert a1 is NaN, which is no time/,
    ],
  ])('changes nothing when a round has %s', async (_what, changed, expected) => {
    const { store } = await begin(open);
    await store.commitRound(fullRound(0));
    const before = await everything(store);
    const bad = { ...fullRound(1), ...changed };
    await expect(store.commitRound(bad)).rejects.toThrow(expected);
    expect(await everything(store)).toEqual(before);
    // The twin: the round itself is taken and does change it.
    await store.commitRound(fullRound(1));
    expect(await everything(store)).not.toEqual(before);
  });

  it('changes nothing when a state cannot be written as JSON', async () => {
    const { store } = await begin(open);
    const before = await everything(store);
    const state = { ...memory, more: new Map() };
    const bad = round(0, { strands: [{ mix: 'm', strand: 'all', state }] });
    await expect(store.commitRound(bad)).rejects.toThrow(`under 'more'`);
    expect(await everything(store)).toEqual(before);
  });

  it('replaces the state of a strand, and drops that of a forgotten one', async () => {
    const { store } = await begin(open);
    await store.commitRound(fullRound(0));
    const state = { ...memory, epochMs: 5 };
    const forgotten = [
      { mix: 'm', strand: 'r=north' },
      { mix: 'm', strand: 'never seen' },
      { mix: 'never seen', strand: 'all' },
    ];
    await store.commitRound(round(1, { strands: [{ mix: 'm', strand: 'all', state }], forgotten }));
    expect(await store.strandStates()).toEqual([{ mix: 'm', strand: 'all', state }]);
  });

  it('knows the last end of each mix that was judged, also without a verdict', async () => {
    const { store } = await begin(open);
    const { batch } = round(0);
    await store.commitRound(round(0, { batch: { ...batch, mixes: ['b', 'a'] } }));
    await store.commitRound(round(4, { batch: { ...round(4).batch, mixes: ['a'] } }));
    await store.commitRound(round(2, { batch: { ...round(2).batch, mixes: ['a'] } }));
    const expected = [
      ['a', T0 + 5 * MINUTE],
      ['b', T0 + MINUTE],
    ];
    expect([...(await store.judgedTo())]).toEqual(expected);
  });

  it('streams batches in order of end and number, from the end asked for', async () => {
    const { store } = await begin(open);
    const later = { ...round(1).batch, number: 1, mixes: ['n'] };
    await store.commitRound(round(1, { batch: later }));
    await store.commitRound(round(1));
    await store.commitRound(round(0));
    const inOrder = [round(0).batch, round(1).batch, later];
    expect(await listOf(store.batches())).toEqual(inOrder);
    expect(await listOf(store.batches(T0 + 2 * MINUTE))).toEqual(inOrder.slice(1));
    expect(await listOf(store.batches(T0 + 2 * MINUTE + 1))).toEqual([]);
  });

  it('streams more batches than it reads at once', async () => {
    const { store } = await begin(open);
    for (let at = 0; at < 1_000; at += 1) await store.commitRound(round(at));
    const ends = (await listOf(store.batches())).map((batch) => batch.endMs);
    expect(ends).toEqual(Array.from({ length: 1_000 }, (_, at) => T0 + (at + 1) * MINUTE));
  });

  it('gives alerts in order of raising, by state and by id, each in its last form', async () => {
    const { store } = await begin(open);
    const first = alert('b', { raisedAtMs: T0 });
    const [second, third] = [alert('a'), alert('c')];
    await store.commitRound(round(0, { alerts: [third, second, first] }));
    const ended = { atMs: T0 + 9, how: 'returned' } as const;
    const normal = { ...second, state: 'normal', ended } as const;
    await store.commitRound(round(1, { alerts: [normal] }));
    expect(await store.alerts({})).toEqual([first, normal, third]);
    expect(await store.alerts({ open: true })).toEqual([first, third]);
    expect(await store.alerts({ open: false })).toEqual([normal]);
    expect(await store.alerts({ ids: ['c', 'none', 'b'] })).toEqual([first, third]);
    expect(await store.alerts({ ids: ['a', 'b'], open: true })).toEqual([first]);
    expect(await store.alerts({ ids: [] })).toEqual([]);
  });

  it('keeps the first text of a digest for good, before or after a verdict names it', async () => {
    const opened = await begin(open);
    await opened.store.commitRound(round(0, { verdicts: [verdict(0)] }));
    expect(await opened.store.configText('digest-1')).toBeNull();
    await opened.store.keepConfig('digest-1', 'store: x');
    await opened.store.keepConfig('digest-1', 'store: y');
    const store = await restarted(opened);
    expect(await store.configText('digest-1')).toBe('store: x');
    expect(await store.configText('digest-2')).toBeNull();
  });
}
