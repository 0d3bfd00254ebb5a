import { request } from 'node:http';
import { connect } from 'node:net';
import type { Socket } from 'node:net';

import { afterEach, describe, expect, it } from 'vitest';

import { createMetrics } from '../../../src/serve/metrics.js';
import { openServer, ServeError } from '../../../src/serve/server.js';
import type { OpenServer, ServerSources } from '../../../src/serve/server.js';
import { emptySnapshot } from './snapshots.js';

const opened: OpenServer[] = [];
const sockets: Socket[] = [];

afterEach(async () => {
  for (const socket of sockets.splice(0)) socket.destroy();
  for (const server of opened.splice(0)) await server.close();
});

async function start(
  sources: Partial<ServerSources> = {},
  log: unknown[] = [],
): Promise<OpenServer> {
  const server = await openServer({
    listen: { host: '127.0.0.1', port: 0 },
    sources: {
      metrics: async () => emptySnapshot(),
      readiness: async () => ({ ready: true, problems: [] }),
      ...sources,
    },
    metrics: createMetrics(),
    logger: { error: (details, message) => log.push({ details, message }) },
  });
  opened.push(server);
  return server;
}

/** Sends a request under any Host and resolves to its status. */
async function statusFor(address: string, host: string): Promise<number | undefined> {
  return new Promise((resolve, reject) => {
    request(`${address}/health/live`, { headers: { host }, agent: false }, (response) => {
      response.resume();
      resolve(response.statusCode);
    })
      .on('error', reject)
      .end();
  });
}

async function open(address: string): Promise<Socket> {
  const { hostname, port } = new URL(address);
  const socket = connect(Number(port), hostname);
  sockets.push(socket);
  socket.on('error', () => socket.destroy());
  await new Promise((resolve) => socket.once('connect', resolve));
  return socket;
}

describe('the health addresses', () => {
  it('say live with 200 whatever the readiness', async () => {
    const { address } = await start({
      readiness: async () => ({ ready: false, problems: ['the store is full'] }),
    });
    const answer = await fetch(`${address}/health/live`);
    expect(answer.status).toBe(200);
    expect(await answer.json()).toEqual({ live: true });
  });

  it('say ready with 200, and not ready with 503 and the problems', async () => {
    let ready = true;
    const { address } = await start({
      readiness: async () => ({ ready, problems: ready ? [] : ['gateway is behind'] }),
    });
    const good = await fetch(`${address}/health/ready`);
    expect([good.status, await good.json()]).toEqual([200, { ready: true, problems: [] }]);
    ready = false;
    const bad = await fetch(`${address}/health/ready`);
    expect([bad.status, await bad.json()]).toEqual([
      503,
      { ready: false, problems: ['gateway is behind'] },
    ]);
  });
});

describe('the metrics address', () => {
  it('answers in text 0.0.4 by default and in OpenMetrics when that is named', async () => {
    const { address } = await start();
    const text = await fetch(`${address}/metrics`);
    expect(text.headers.get('content-type')).toBe('text/plain; version=0.0.4; charset=utf-8');
    const open = await fetch(`${address}/metrics`, {
      headers: { accept: 'application/openmetrics-text' },
    });
    expect(open.headers.get('content-type')).toBe(
      'application/openmetrics-text; version=1.0.0; charset=utf-8',
    );
    expect(await open.text()).toMatch(/\n# EOF\n$/);
    expect(await text.text()).not.toContain('# EOF');
  });

  it('answers 500 in plain words and logs the cause when the daemon cannot tell', async () => {
    const log: unknown[] = [];
    const metrics = async (): Promise<never> => {
      throw new Error('disk /secret/path is gone');
    };
    const { address } = await start({ metrics }, log);
    const answer = await fetch(`${address}/metrics`);
    expect(answer.status).toBe(500);
    expect(await answer.json()).toEqual({
      error: 'the request failed inside; the log says why',
    });
    expect(log).toMatchObject([{ message: 'a request failed' }]);
  });
});

describe('requests that are refused', () => {
  it('are those under a name that is not loopback’s', async () => {
    const { address } = await start();
    const { port } = new URL(address);
    for (const host of ['localhost', `LOCALHOST:${port}`, '127.0.0.1', `[::1]:${port}`]) {
      expect(await statusFor(address, host)).toBe(200);
    }
    for (const host of [
      `evil.example:${port}`,
      'localhost.evil.example',
      '127.0.0.1.evil.example',
      'localhost:1:2',
      'user@localhost',
      '192.0.2.1',
      '::1',
    ]) {
      expect(await statusFor(address, host)).toBe(421);
    }
  });

  it('are refused under a foreign name also where there is no such address', async () => {
    const { address } = await start();
    const foreign = { headers: { host: 'evil.example' }, agent: false };
    const status = await new Promise((resolve, reject) => {
      request(`${address}/nothing`, foreign, (response) => {
        response.resume();
        resolve(response.statusCode);
      })
        .on('error', reject)
        .end();
    });
    expect(status).toBe(421);
  });

  it('are told in JSON what there is not', async () => {
    const { address } = await start();
    const answer = await fetch(`${address}/nothing?x=1`, { method: 'POST', body: '' });
    expect([answer.status, await answer.json()]).toEqual([
      404,
      { error: 'there is no POST /nothing?x=1' },
    ]);
  });

  it('are those with a head over 16 KiB', async () => {
    const { address } = await start();
    const answer = await fetch(`${address}/health/live`, {
      headers: { 'x-long': 'x'.repeat(20_000) },
    });
    // RFC 6585, section 5.
    expect(answer.status).toBe(431);
  });
});

describe('opening and closing', () => {
  it('says that the address is taken and what to do', async () => {
    const { address } = await start();
    const port = Number(new URL(address).port);
    const again = openServer({
      listen: { host: '127.0.0.1', port },
      sources: {
        metrics: async () => emptySnapshot(),
        readiness: async () => ({ ready: true, problems: [] }),
      },
      metrics: createMetrics(),
      logger: { error: () => undefined },
    });
    await expect(again).rejects.toThrow(ServeError);
    await expect(again).rejects.toThrow(
      `listen: 127.0.0.1:${port} is taken by another program; set another listen`,
    );
  });

  it('closes though connections are idle, silent or stuck inside a request', async () => {
    const server = await start();
    const keptAlive = await open(server.address);
    keptAlive.write('GET /health/live HTTP/1.1\r\nHost: localhost\r\n\r\n');
    await new Promise((resolve) => keptAlive.once('data', resolve));
    const silent = await open(server.address);
    const stuck = await open(server.address);
    stuck.write('GET /health/live HTTP/1.1\r\nHost: loc');
    const ends = [keptAlive, silent, stuck].map(
      async (socket) => new Promise((resolve) => socket.once('close', resolve)),
    );
    await server.close();
    await Promise.all(ends);
    await expect(fetch(`${server.address}/health/live`)).rejects.toThrow('fetch failed');
  });

  it('lets an answer under way be finished', async () => {
    let release: () => void = () => undefined;
    let isAsked = false;
    const server = await start({
      readiness: async () => {
        isAsked = true;
        await new Promise<void>((resolve) => (release = resolve));
        return { ready: true, problems: [] };
      },
    });
    const answer = fetch(`${server.address}/health/ready`);
    await expect.poll(() => isAsked).toBe(true);
    const closed = server.close();
    release();
    expect((await answer).status).toBe(200);
    await closed;
  });
});
