import { createHmac } from 'node:crypto';

import { describe, expect, it } from 'vitest';

import type { Post } from '../../../src/send/post.js';
import { readRetryAfter, sendWebhook, sign } from '../../../src/send/webhook.js';
import { sampleMessage, sampleSender, startMs } from './samples.js';

interface Posted {
  readonly url: string;
  readonly headers: Readonly<Record<string, string>>;
  readonly body: string;
  readonly timeoutMs: number;
}

async function send(secret: string | null, status: number, nowMs = startMs): Promise<Posted> {
  const posted: Posted[] = [];
  const post: Post = async (url, headers, body, timeoutMs) => {
    posted.push({ url, headers, body, timeoutMs });
    return { status, retryAfter: null };
  };
  const sender = sampleSender({ secret });
  await sendWebhook(sampleMessage(), { sender, source: 'urn:example:t', nowMs, post });
  const first = posted[0];
  if (first === undefined) throw new Error('nothing was posted');
  return first;
}

async function outcome(status: number): Promise<unknown> {
  const post: Post = async () => ({ status, retryAfter: null });
  return sendWebhook(sampleMessage(), {
    sender: sampleSender(),
    source: 'urn:example:t',
    nowMs: startMs,
    post,
  });
}

describe('sending to a webhook', () => {
  it('posts the event in structured mode to the configured address within 10 s', async () => {
    const posted = await send(null, 200);
    expect(posted.url).toBe('http://127.0.0.1:9/hook');
    expect(posted.timeoutMs).toBe(10_000);
    expect(posted.headers['content-type']).toBe('application/cloudevents+json');
    expect(JSON.parse(posted.body)).toMatchObject({ specversion: '1.0', id: 'message-1' });
  });

  it('has no signature when the sender has no secret', async () => {
    expect((await send(null, 200)).headers).not.toHaveProperty('tallyward-signature');
  });

  it('signs the stamp, a dot and the body when the sender has a secret', async () => {
    const { headers, body } = await send('s3cret', 200, startMs + 1_999);
    const stamp = headers['tallyward-timestamp'];
    expect(stamp).toBe(String(startMs / 1000 + 1));
    const expected = createHmac('sha256', 's3cret').update(`${stamp}.${body}`).digest('hex');
    expect(headers['tallyward-signature']).toBe(expected);
  });

  it('sends the same body under a new stamp when it is sent again later', async () => {
    const [first, again] = [await send('k', 200), await send('k', 200, startMs + 60_000)];
    expect(again.body).toBe(first.body);
    expect(again.headers['tallyward-signature']).not.toBe(first.headers['tallyward-signature']);
  });

  it('takes any 2xx for delivered and anything else for failed', async () => {
    for (const status of [200, 202, 204, 299]) {
      expect(await outcome(status)).toEqual({ kind: 'delivered' });
    }
    for (const status of [199, 301, 400, 410, 429, 500]) {
      expect(await outcome(status)).toMatchObject({ kind: 'failed' });
    }
  });

  it('says what to do when the receiver redirects', async () => {
    expect(await outcome(302)).toMatchObject({
      error:
        'the receiver answered HTTP 302; redirects are not followed, ' +
        'configure the final address',
    });
  });
});

describe('the signature', () => {
  it('is HMAC-SHA-256 in hex of stamp, dot and body', () => {
    // RFC 4231, section 4.3 (test case 2): key "Jefe", data "what do ya want for nothing?". The
    // data has no dot, so the function is checked through the same primitive on its own text.
    const rfc = createHmac('sha256', 'Jefe').update('what do ya want for nothing?').digest('hex');
    expect(rfc).toBe('5bdcc146bf60754e6a042426089575c75a003f089d2739839dec58b964ec3843');
    const own = createHmac('sha256', 'Jefe').update('1767225600.{"a":"ü"}').digest('hex');
    expect(sign('Jefe', '1767225600', '{"a":"ü"}')).toBe(own);
  });
});

describe('Retry-After', () => {
  it('is read as seconds or as a date, and at most an hour is waited', () => {
    expect(readRetryAfter('120', startMs)).toBe(120_000);
    expect(readRetryAfter('Sun, 01 Mar 2026 00:02:00 GMT', startMs)).toBe(120_000);
    expect(readRetryAfter('86400', startMs)).toBe(3_600_000);
    expect(readRetryAfter('Mon, 01 Mar 2027 00:00:00 GMT', startMs)).toBe(3_600_000);
  });

  it('asks for no wait when the date is past, and says nothing when it cannot be read', () => {
    expect(readRetryAfter('Sat, 28 Feb 2026 00:00:00 GMT', startMs)).toBe(0);
    for (const header of [null, '', '-1', '1.5', 'soon', 'Sun, 99 Foo 2026 00:00:00 GMT']) {
      expect(readRetryAfter(header, startMs)).toBeNull();
    }
  });
});
