import { request as httpRequest } from 'node:http';
import type { ClientRequest, IncomingMessage, RequestOptions } from 'node:http';
import { request as httpsRequest } from 'node:https';

export interface PostResult {
  /** HTTP status of the answer, 200..599. */
  readonly status: number;
  /** The `Retry-After` header as received; null where there was none. */
  readonly retryAfter: string | null;
}

/** Sends one HTTP POST. Rejects when no whole head of an answer came within the time. */
export type Post = (
  url: string,
  headers: Readonly<Record<string, string>>,
  body: string,
  timeoutMs: number,
) => Promise<PostResult>;

/** More of an answer than this is not even read: only its status matters. */
const maxAnswerBytes = 64 * 1024;
const maxAnswerHeadBytes = 16 * 1024;

/**
 * The real port: one connection a message, redirects never followed (a signed body must reach only
 * the address that was configured), the answer's body thrown away.
 *
 * @throws TypeError (rejection) when the URL is no http or https address.
 */
export const postOverHttp: Post = (url, headers, body, timeoutMs) =>
  new Promise((resolve, reject) => {
    const target = new URL(url);
    const signal = AbortSignal.timeout(timeoutMs);
    const sending = open(target, { ...options(headers, body), signal });
    let result: PostResult | null = null;
    let failure: Error | null = null;
    sending.on('response', (answer) => {
      result = resultOf(answer);
      readAway(answer, sending);
    });
    sending.on('error', (error) => {
      failure = signal.aborted
        ? new Error(`no answer within ${timeoutMs / 1000} s`, { cause: error })
        : error;
    });
    // The status is known once the head is there; what becomes of the body does not change it.
    sending.on('close', () => {
      if (result !== null) resolve(result);
      else reject(failure ?? new Error('the connection was closed without an answer'));
    });
    sending.end(body);
  });

function open(target: URL, requestOptions: RequestOptions): ClientRequest {
  if (target.protocol === 'https:') return httpsRequest(target, requestOptions);
  if (target.protocol === 'http:') return httpRequest(target, requestOptions);
  throw new TypeError(`${target.protocol} is not an address to post to; use http or https`);
}

function options(headers: Readonly<Record<string, string>>, body: string): RequestOptions {
  return {
    method: 'POST',
    headers: { ...headers, 'content-length': String(Buffer.byteLength(body)) },
    // No pool: an idle kept connection would hold up the end of the process.
    agent: false,
    maxHeaderSize: maxAnswerHeadBytes,
  };
}

function resultOf(answer: IncomingMessage): PostResult {
  return { status: answer.statusCode ?? 0, retryAfter: answer.headers['retry-after'] ?? null };
}

function readAway(answer: IncomingMessage, sending: ClientRequest): void {
  let bytes = 0;
  answer.on('data', (chunk: Buffer) => {
    bytes += chunk.length;
    if (bytes > maxAnswerBytes) sending.destroy();
  });
  // A body cut short is no fault of the delivery: `close` follows and resolves with the status.
  answer.on('error', () => sending.destroy());
}
