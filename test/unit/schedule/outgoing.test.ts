import { describe, expect, it } from 'vitest';

import { outgoing } from '../../../src/schedule/outgoing.js';
import { sampleAlert, sampleSender } from '../send/samples.js';
import { CALM, configOf, MINUTE, mixOf, Scene, SHIFTED, T0 } from './scene.js';

const judgeableMs = new Map([['gateway-outcomes', 1_000_000]]);
const alert = sampleAlert();

describe('what senders are asked to deliver', () => {
  const sender = sampleSender({ freshMs: 5_000 });

  it('news as old as fresh allows is a message at once', () => {
    const { messages, digestEntries } = outgoing([{ alert, event: 'raised' }], [sender], {
      nowMs: 1_005_000,
      judgeableMs,
    });
    expect(digestEntries).toEqual([]);
    expect(messages).toEqual([
      {
        id: 'alert-1-raised-oncall',
        sender: 'oncall',
        event: 'raised',
        createdAtMs: 1_005_000,
        summary: alert.sentence,
        alerts: [alert],
      },
    ]);
  });

  it('news a millisecond older waits for the digest', () => {
    const { messages, digestEntries } = outgoing([{ alert, event: 'raised' }], [sender], {
      nowMs: 1_005_001,
      judgeableMs,
    });
    expect(messages).toEqual([]);
    expect(digestEntries).toEqual([
      { sender: 'oncall', alertId: 'alert-1', event: 'raised', createdAtMs: 1_005_001 },
    ]);
  });

  it('each sender has its own idea of fresh', () => {
    const patient = sampleSender({ name: 'archive', freshMs: 60_000 });
    const { messages, digestEntries } = outgoing([{ alert, event: 'raised' }], [sender, patient], {
      nowMs: 1_020_000,
      judgeableMs,
    });
    expect(messages.map((m) => m.sender)).toEqual(['archive']);
    expect(digestEntries.map((e) => e.sender)).toEqual(['oncall']);
  });

  it('a provisional alert goes into the digest, however fresh', () => {
    const provisional = sampleAlert({ provisional: true });
    const times = { nowMs: 1_000_000, judgeableMs };
    const news = [{ alert: provisional, event: 'raised' }] as const;
    expect(outgoing(news, [sender], times).messages).toEqual([]);
    expect(outgoing(news, [sender], times).digestEntries).toHaveLength(1);
  });

  it('an end names what happened and why before the sentence', () => {
    const ended = sampleAlert({
      history: [{ atMs: 1, event: 'returned', note: 'back to the former mix' }],
    });
    const { messages } = outgoing([{ alert: ended, event: 'returned' }], [sender], {
      nowMs: 1_000_000,
      judgeableMs,
    });
    expect(messages[0]?.summary).toBe(`returned (back to the former mix): ${alert.sentence}`);
  });
});

describe('rounds judged late', () => {
  const oncall = sampleSender({ freshMs: 15 * MINUTE });

  async function raisedAt(nowMs: number): Promise<Scene> {
    const scene = await Scene.open(configOf([mixOf()], { send: [oncall] }));
    await scene.fill(0, 40, CALM);
    await scene.put(40, SHIFTED);
    scene.clock.set(nowMs);
    await scene.judgeTo(41);
    return scene;
  }

  it('in time, a raise is in the outbox', async () => {
    const scene = await raisedAt(T0 + 42 * MINUTE);
    const due = await scene.store.waiting('oncall', 10);
    expect(due.map(({ message }) => message.event)).toEqual(['raised']);
    expect(await scene.store.digestEntries('oncall')).toEqual([]);
  });

  it('after downtime it waits for the digest, and the verdict is the same', async () => {
    const [late, fresh] = [await raisedAt(T0 + 999 * MINUTE), await raisedAt(T0 + 42 * MINUTE)];
    expect(await late.store.waitingSenders()).toEqual([]);
    expect((await late.store.digestEntries('oncall')).map((e) => e.event)).toEqual(['raised']);
    expect(await late.verdicts()).toEqual(await fresh.verdicts());
  });

  it('the end of a forgotten strand, noticed long after, does not page either', async () => {
    const scene = await Scene.open(configOf([mixOf({ settleMs: 1e12 })], { send: [oncall] }));
    await scene.fill(0, 40, CALM);
    await scene.put(40, SHIFTED);
    scene.clock.set(T0 + 999 * MINUTE);
    await scene.judgeTo(70);
    expect(await scene.store.waitingSenders()).toEqual([]);
    expect((await scene.store.digestEntries('oncall')).map((e) => e.event)).toEqual([
      'raised',
      'returned',
    ]);
  });
});
