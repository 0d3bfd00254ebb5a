import { fastify } from 'fastify';
import type { FastifyInstance } from 'fastify';

import { endIdleOnClose } from './connections.js';
import { guardHost } from './host.js';
import type { Metrics } from './metrics.js';
import type { MetricsSnapshot } from './snapshot.js';

/** What the server may ask the daemon; it never sees more of it. */
export interface ServerSources {
  metrics(): Promise<MetricsSnapshot>;
  readiness(): Promise<Readiness>;
}

export interface Readiness {
  readonly ready: boolean;
  /** Why not, or what is wrong although ready; one sentence each. */
  readonly problems: readonly string[];
}

/** The part of a pino logger that the server needs. */
export interface ServerLogger {
  error(details: object, message: string): void;
}

export interface ServerOptions {
  readonly listen: { readonly host: string; readonly port: number };
  readonly sources: ServerSources;
  readonly metrics: Metrics;
  readonly logger: ServerLogger;
}

export interface OpenServer {
  /** `http://host:port`, with the port that the system chose where 0 was asked for. */
  readonly address: string;
  /** Ends idle connections, waits for answers under way, and frees the port. */
  close(): Promise<void>;
}

/** The server could not be opened; the message says where and what to do. */
export class ServeError extends Error {
  override readonly name = 'ServeError';
}

const maxBodyBytes = 64 * 1024;
const maxHeadBytes = 16 * 1024;
const requestTimeoutMs = 10_000;
const idleTimeoutMs = 30_000;
const maxConnections = 256;

/**
 * Opens the HTTP server: `GET /metrics`, `GET /health/live`, `GET /health/ready`.
 *
 * @throws ServeError when the address cannot be listened on.
 */
export async function openServer(options: ServerOptions): Promise<OpenServer> {
  const app = fastify({
    bodyLimit: maxBodyBytes,
    requestTimeout: requestTimeoutMs,
    connectionTimeout: idleTimeoutMs,
    keepAliveTimeout: idleTimeoutMs,
    http: { maxHeaderSize: maxHeadBytes, connectionsCheckingInterval: 1_000 },
  });
  app.server.maxConnections = maxConnections;
  endIdleOnClose(app);
  guardHost(app);
  addErrorAnswers(app, options.logger);
  addRoutes(app, options);
  const address = await listen(app, options.listen);
  return {
    address,
    close: async () => {
      await app.close();
    },
  };
}

function addRoutes(app: FastifyInstance, { sources, metrics }: ServerOptions): void {
  app.addHook('onSend', async (_request, reply) => {
    reply.header('cache-control', 'no-store').header('x-content-type-options', 'nosniff');
  });
  app.get('/metrics', async (request, reply) => {
    const { contentType, body } = await metrics.render(
      await sources.metrics(),
      request.headers.accept,
    );
    return reply.header('content-type', contentType).header('vary', 'Accept').send(body);
  });
  app.get('/health/live', async () => ({ live: true }));
  app.get('/health/ready', async (_request, reply) => {
    const { ready, problems } = await sources.readiness();
    return reply.code(ready ? 200 : 503).send({ ready, problems });
  });
}

/** Errors are JSON in plain words; what went wrong inside goes to the log, not to the client. */
function addErrorAnswers(app: FastifyInstance, logger: ServerLogger): void {
  app.setNotFoundHandler(async (request, reply) =>
    reply.code(404).send({ error: `there is no ${request.method} ${request.url.slice(0, 200)}` }),
  );
  app.setErrorHandler<Error & { statusCode?: number }>(async (error, request, reply) => {
    const status = error.statusCode ?? 500;
    if (status >= 400 && status < 500) return reply.code(status).send({ error: error.message });
    logger.error({ err: error, url: request.url }, 'a request failed');
    return reply.code(500).send({ error: 'the request failed inside; the log says why' });
  });
}

async function listen(
  app: FastifyInstance,
  { host, port }: ServerOptions['listen'],
): Promise<string> {
  try {
    return await app.listen({ host, port });
  } catch (error) {
    await app.close();
    const code = error instanceof Error && 'code' in error ? String(error.code) : '';
    const why = listenProblems.get(code) ?? `cannot be listened on (${code || String(error)})`;
    throw new ServeError(`listen: ${host}:${port} ${why}; set another listen`, { cause: error });
  }
}

const listenProblems: ReadonlyMap<string, string> = new Map([
  ['EADDRINUSE', 'is taken by another program'],
  ['EACCES', 'is not allowed for this user'],
  ['EADDRNOTAVAIL', 'is no address of this machine'],
  ['ENOTFOUND', 'is no known host'],
]);
