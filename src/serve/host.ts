import type { FastifyInstance } from 'fastify';

/**
 * Whether a `Host` header names this machine's loopback: `localhost`, `127.0.0.1` (or another
 * address of that block, which no name can stand for) or `[::1]`, with any port or none.
 */
function isLoopbackHost(host: string | undefined): boolean {
  if (host === undefined || host.length > 64) return false;
  return /^(localhost|127(\.\d{1,3}){3}|\[::1\])(:\d{1,5})?$/i.test(host);
}

/**
 * Refuses requests under any other name. A page from elsewhere can make a browser resolve its own
 * name to 127.0.0.1 and read the answers as its own (DNS rebinding); its `Host` gives it away.
 */
export function guardHost(app: FastifyInstance): void {
  app.addHook('onRequest', async (request, reply) => {
    if (isLoopbackHost(request.headers.host)) return;
    await reply.code(421).send({
      error: 'this server answers to localhost, 127.0.0.1 and [::1] only; use one of these',
    });
  });
}
