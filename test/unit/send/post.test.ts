import { createServer } from 'node:http';
import type { IncomingMessage, RequestListener, Server, ServerResponse } from 'node:http';
import type { AddressInfo } from 'node:net';

import { afterEach, describe, expect, it } from 'vitest';

import { postOverHttp } from '../../../src/send/post.js';

const servers: Server[] = [];

afterEach(async () => {
  for (const server of servers.splice(0)) {
    server.closeAllConnections();
    await new Promise((resolve) => server.close(resolve));
  }
});

async function receiver(answer: RequestListener): Promise<string> {
  const server = createServer(answer);
  servers.push(server);
  await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
  return `http://127.0.0.1:${(server.address() as AddressInfo).port}/hook`;
}

async function bodyOf(request: IncomingMessage): Promise<string> {
  const chunks: Buffer[] = [];
  for await (const chunk of request) chunks.push(chunk as Buffer);
  return Buffer.concat(chunks).toString('utf8');
}

describe('posting over HTTP', () => {
  it('sends headers and body whole and gives the status and Retry-After', async () => {
    const seen: unknown[] = [];
    const url = await receiver((request: IncomingMessage, response: ServerResponse) => {
      void bodyOf(request).then((body) => {
        seen.push({ method: request.method, url: request.url, body, own: request.headers['x-a'] });
        response.writeHead(503, { 'retry-after': '7' }).end('later');
      });
    });
    const result = await postOverHttp(url, { 'x-a': 'b' }, 'körper', 5_000);
    expect(result).toEqual({ status: 503, retryAfter: '7' });
    expect(seen).toEqual([{ method: 'POST', url: '/hook', body: 'körper', own: 'b' }]);
  });

  it('does not follow a redirect', async () => {
    const paths: (string | undefined)[] = [];
    const url = await receiver((request, response) => {
      paths.push(request.url);
      response.writeHead(307, { location: '/elsewhere' }).end();
    });
    expect((await postOverHttp(url, {}, '{}', 5_000)).status).toBe(307);
    expect(paths).toEqual(['/hook']);
  });

  it('gives the status without reading an endless answer to its end', async () => {
    let isOpen = true;
    const url = await receiver((_request, response) => {
      response.on('close', () => (isOpen = false));
      response.writeHead(200);
      const more = (): void => {
        while (isOpen && response.write('x'.repeat(16_384)));
        response.once('drain', more);
      };
      more();
    });
    expect((await postOverHttp(url, {}, '{}', 5_000)).status).toBe(200);
    await expect.poll(() => isOpen).toBe(false);
  });

  it('fails with a reason when no answer comes within the time', async () => {
    const url = await receiver(() => undefined);
    await expect(postOverHttp(url, {}, '{}', 50)).rejects.toThrow('no answer within 0.05 s');
  });

  it('takes the status when the head came in time and the body never ends', async () => {
    const url = await receiver((_request, response) => {
      response.writeHead(200);
      response.write('x');
    });
    expect((await postOverHttp(url, {}, '{}', 100)).status).toBe(200);
  });

  it('fails when the receiver hangs up, or nobody listens', async () => {
    const url = await receiver((request) => request.socket.destroy());
    await expect(postOverHttp(url, {}, '{}', 5_000)).rejects.toThrow(/socket hang up|ECONNRESET/);
    const closed = servers.pop();
    await new Promise((resolve) => closed?.close(resolve));
    await expect(postOverHttp(url, {}, '{}', 5_000)).rejects.toThrow('ECONNREFUSED');
  });

  it('refuses an address that is neither http nor https', async () => {
    await expect(postOverHttp('ftp://127.0.0.1/', {}, '{}', 5_000)).rejects.toThrow(
      'ftp: is not an address to post to; use http or https',
    );
  });
});
