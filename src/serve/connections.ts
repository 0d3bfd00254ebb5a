import type { Socket } from 'node:net';

import type { FastifyInstance } from 'fastify';

/**
 * On closing, ends every connection that has no answer under way: kept alive, silent, or stuck in
 * the middle of a request. Node's own way spares the latter two, which then hold up the close for
 * as long as they like. An answer under way is finished; its connection ends after it.
 */
export function endIdleOnClose(app: FastifyInstance): void {
  const idle = new Set<Socket>();
  let isClosing = false;
  app.server.on('connection', (socket: Socket) => {
    idle.add(socket);
    socket.once('close', () => idle.delete(socket));
  });
  app.server.on('request', ({ socket }, response) => {
    idle.delete(socket);
    response.once('close', () => {
      if (isClosing) socket.end();
      else if (!socket.destroyed) idle.add(socket);
    });
  });
  app.addHook('preClose', async () => {
    isClosing = true;
    for (const socket of idle) socket.destroy();
  });
}
