import { createHmac } from 'node:crypto';

import type { SenderConfig } from '../config/types.js';
import type { Message } from '../terms/message.js';
import { cloudEvent } from './cloudEvent.js';
import type { Post } from './post.js';

export type SendResult =
  | { readonly kind: 'delivered' }
  | {
      readonly kind: 'failed';
      /** What went wrong, for a person; never holds the address or the secret. */
      readonly error: string;
      /** The earliest next attempt that the receiver asked for, from now; null where it did not. */
      readonly retryAfterMs: number | null;
    };

const timeoutMs = 10_000;
const maxRetryAfterMs = 3_600_000;
const maxErrorLength = 300;

/**
 * Sends one message to a webhook and says how it went. Any 2xx is delivered; every other answer is
 * worth another attempt, since a receiver may be misconfigured for a while.
 *
 * @param nowMs real time of sending: the stamp that is signed.
 */
export async function sendWebhook(
  message: Message,
  options: {
    readonly sender: SenderConfig;
    readonly source: string;
    readonly nowMs: number;
    readonly post: Post;
  },
): Promise<SendResult> {
  const { sender, source, nowMs, post } = options;
  const body = JSON.stringify(cloudEvent(message, source));
  const stamp = String(Math.floor(nowMs / 1000));
  const headers = {
    'content-type': 'application/cloudevents+json',
    'user-agent': 'tallyward',
    'tallyward-timestamp': stamp,
    ...(sender.secret === null ? {} : { 'tallyward-signature': sign(sender.secret, stamp, body) }),
  };
  try {
    const answer = await post(sender.webhook, headers, body, timeoutMs);
    if (answer.status >= 200 && answer.status < 300) return { kind: 'delivered' };
    const retryAfterMs = readRetryAfter(answer.retryAfter, nowMs);
    return { kind: 'failed', error: refusal(answer.status), retryAfterMs };
  } catch (error) {
    return { kind: 'failed', error: reasonOf(error), retryAfterMs: null };
  }
}

/** Hex HMAC-SHA-256 (RFC 2104) of stamp, a dot and the body, all in UTF-8. */
export function sign(secret: string, stamp: string, body: string): string {
  return createHmac('sha256', secret).update(`${stamp}.${body}`, 'utf8').digest('hex');
}

/**
 * `Retry-After` as milliseconds from now, at most one hour; null where it is absent or unreadable.
 * Source: RFC 9110 (Fielding, Nottingham and Reschke, 2022), section 10.2.3.
 */
export function readRetryAfter(header: string | null, nowMs: number): number | null {
  if (header === null) return null;
  const text = header.trim();
  const isDate = /^[A-Z][a-z]{2}, \d{2} [A-Z][a-z]{2} \d{4} \d{2}:\d{2}:\d{2} GMT$/.test(text);
  const waitMs = /^\d{1,10}$/.test(text)
    ? Number(text) * 1000
    : isDate
      ? Date.parse(text) - nowMs
      : Number.NaN;
  return Number.isNaN(waitMs) ? null : Math.min(Math.max(waitMs, 0), maxRetryAfterMs);
}

function refusal(status: number): string {
  const hint =
    status >= 300 && status < 400
      ? '; redirects are not followed, configure the final address'
      : '';
  return `the receiver answered HTTP ${status}${hint}`;
}

function reasonOf(error: unknown): string {
  const text = error instanceof Error && error.message !== '' ? error.message : String(error);
  return text.slice(0, maxErrorLength);
}
