import { createServer, type IncomingHttpHeaders, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';

/** A post that a webhook received. */
export interface Received {
  readonly path: string;
  readonly headers: IncomingHttpHeaders;
  readonly body: string;
  readonly event: CloudEvent;
}

/** The posted document, as far as tests look at it. */
export interface CloudEvent {
  readonly specversion: string;
  readonly id: string;
  readonly source: string;
  readonly type: string;
  readonly data: {
    readonly summary: string;
    readonly alerts: readonly { readonly id: string; readonly sentence: string }[];
  };
}

/** `take` answers 200; `refuse` 503; `hang up` takes the post, but its answer is lost. */
export type Mood = 'take' | 'refuse' | 'hang up';

/** A webhook on loopback that takes or refuses posts as the test says. */
export class Receiver {
  /** What arrived and was not refused, in order. */
  readonly received: Received[] = [];
  readonly refused: Received[] = [];
  private readonly server: Server;

  private constructor(mood: (event: CloudEvent) => Mood) {
    this.server = createServer((request, answer) => {
      const chunks: Buffer[] = [];
      request.on('data', (chunk: Buffer) => chunks.push(chunk));
      // A sender killed in the middle of its post sent nothing.
      request.on('error', () => answer.destroy());
      request.on('end', () => {
        const body = Buffer.concat(chunks).toString('utf8');
        const event = JSON.parse(body) as CloudEvent;
        const post = { path: request.url ?? '', headers: request.headers, body, event };
        const how = mood(event);
        (how === 'refuse' ? this.refused : this.received).push(post);
        if (how === 'hang up') answer.destroy();
        else answer.writeHead(how === 'take' ? 200 : 503).end();
      });
    });
  }

  static async open(mood: (event: CloudEvent) => Mood): Promise<Receiver> {
    const receiver = new Receiver(mood);
    await new Promise<void>((resolve) => receiver.server.listen(0, '127.0.0.1', resolve));
    return receiver;
  }

  /** How many posts came, refused or not. */
  get posts(): number {
    return this.received.length + this.refused.length;
  }

  url(path: string): string {
    const { port } = this.server.address() as AddressInfo;
    return `http://127.0.0.1:${port}/${path}`;
  }

  close(): Promise<void> {
    this.server.closeAllConnections();
    return new Promise((resolve) => this.server.close(() => resolve()));
  }
}
