import { createHmac } from 'node:crypto';
import { setTimeout as delay } from 'node:timers/promises';
import { describe, expect } from 'vitest';
import { Chance, line, type Shares } from './logs.js';
import { it, type Place } from './program.js';
import { type Mood, type Received, Receiver } from './receiver.js';

const secret = 'seven grey geese';
const windowMs = 60_000;
const startMs = Date.UTC(2026, 2, 2);

const usual: Shares = [
  ['repaired', 0.8],
  ['replaced', 0.15],
  ['scrapped', 0.05],
];
const troubled: Shares = [
  ['repaired', 0.4],
  ['replaced', 0.15],
  ['scrapped', 0.45],
];

/** A workshop's log of some hours; from each of the minutes on, a quarter of an hour of trouble. */
function workshop(minutes: number, troubles: readonly number[]): string {
  const chance = new Chance(77);
  const lines: string[] = [];
  for (let minute = 0; minute < minutes; minute++) {
    const isTrouble = troubles.some((first) => minute >= first && minute < first + 15);
    for (const atMs of chance.instants(80, startMs + minute * windowMs, windowMs)) {
      lines.push(line(atMs, { end: chance.pick(isTrouble ? troubled : usual) }));
    }
  }
  return lines.join('');
}

function configuration(receiver: Receiver, fresh: string): string {
  return `store: var/store.db
listen: 127.0.0.1:0
collectors:
  workshop: { tail: logs/workshop.ndjson, decode: json, time: ts }
mixes:
  ends:
    from: workshop
    category: end
    window: 1m
    yardstick: { baseline: { last: 1h } }
send:
  oncall: { webhook: "${receiver.url('hook')}", secret: "\${HOOK_SECRET}", fresh: ${fresh} }
`;
}

const env = { HOOK_SECRET: secret };
const once = ['start', '--config', 'watch.yaml', '--once'];

/** Runs `start --once` again and again, each a restart, until the condition holds. */
async function runUntil(place: Place, holds: () => boolean): Promise<void> {
  for (let look = 0; !holds(); look++) {
    if (look === 40) throw new Error('it did not come to hold');
    await delay(400);
    await place.output(once, { env });
  }
}

/** Hex HMAC-SHA-256 (RFC 2104) of timestamp, dot and body, as a receiver checks it. */
function signatureOf({ headers, body }: Received, key: string): string {
  const stamp = String(headers['tallyward-timestamp']);
  return createHmac('sha256', key).update(`${stamp}.${body}`).digest('hex');
}

describe.concurrent('the outbox', { timeout: 60_000 }, () => {
  it('when the webhook is down, delivers after a restart under the same id and signed', async ({
    place,
  }) => {
    let mood: Mood = 'refuse';
    const receiver = await Receiver.open(() => mood);
    place.write('logs/workshop.ndjson', workshop(130, [110]));
    place.write('watch.yaml', configuration(receiver, '3660d'));
    const told = await place.output(once, { env });
    expect(told.match(/^raised /gm)).toHaveLength(1);
    expect(receiver.refused).toHaveLength(1);
    expect(receiver.received).toEqual([]);

    // The answer to the second attempt is lost: the third brings the same message again.
    mood = 'hang up';
    await runUntil(place, () => receiver.received.length === 1);
    mood = 'take';
    await runUntil(place, () => receiver.received.length >= 2);
    const [refused] = receiver.refused;
    const [lost, taken] = receiver.received;
    expect(taken.event.id).toBe(refused.event.id);
    expect(taken.body).toBe(refused.body);
    expect(lost.body).toBe(refused.body);
    expect(taken.event).toMatchObject({ specversion: '1.0', type: 'tallyward.alert.raised' });
    expect(taken.headers['content-type']).toBe('application/cloudevents+json');
    expect(told).toContain(`raised ${taken.event.data.summary}`);

    for (const post of [refused, lost, taken]) {
      expect(post.headers['tallyward-signature']).toBe(signatureOf(post, secret));
      expect(post.headers['tallyward-signature']).not.toBe(signatureOf(post, 'another'));
    }
    // Stamped when it is sent, so that an old post cannot be replayed.
    const stampMs = Number(taken.headers['tallyward-timestamp']) * 1000;
    expect(Math.abs(Date.now() - stampMs)).toBeLessThan(60_000);

    const before = receiver.posts;
    await place.output(once, { env });
    expect(receiver.posts).toBe(before);
    await receiver.close();
  });

  it('when history is old, sends one digest of what was missed instead of paging', async ({
    place,
  }) => {
    const receiver = await Receiver.open(() => 'take');
    place.write('logs/workshop.ndjson', workshop(300, [110, 200]));
    place.write('watch.yaml', configuration(receiver, '15m'));
    const told = await place.output(once, { env });
    const raised = told.match(/^raised (.*)$/gm) ?? [];
    expect(raised).toHaveLength(2);
    expect(receiver.received.map(({ event }) => event.type)).toEqual(['tallyward.digest']);
    const [{ event }] = receiver.received;
    const [head, ...sentences] = event.data.summary.split('\n');
    expect(head).toBe('while Tallyward was away: 2 shifts, 0 still open');
    expect(sentences.map((sentence) => `raised ${sentence}`)).toEqual(raised);
    expect(event.data.alerts.map(({ sentence }) => sentence)).toEqual(sentences);

    await place.output(once, { env });
    expect(receiver.posts).toBe(1);
    await receiver.close();
  });

  it('when the webhook takes everything at once, is told of the raise and of the return', async ({
    place,
  }) => {
    const receiver = await Receiver.open(() => 'take');
    place.write('logs/workshop.ndjson', workshop(180, [110]));
    place.write('watch.yaml', configuration(receiver, '3660d'));
    await place.output(once, { env });
    const types = receiver.received.map(({ event }) => event.type);
    expect(types).toEqual(['tallyward.alert.raised', 'tallyward.alert.returned']);
    const ids = receiver.received.map(({ event }) => event.data.alerts[0].id);
    expect(new Set(ids).size).toBe(1);
    expect(new Set(receiver.received.map(({ event }) => event.id)).size).toBe(2);
    await receiver.close();
  });
});
