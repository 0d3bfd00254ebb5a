import type { Readable, Writable } from 'node:stream';
import type { Clock } from '../clock/clock.js';

/** Everything a command may touch outside itself; `main.ts` passes the real ones. */
export interface Ports {
  readonly clock: Clock;
  readonly env: Readonly<Record<string, string | undefined>>;
  readonly stdin: Readable & { readonly isTTY?: boolean };
  readonly stdout: Writable & { readonly isTTY?: boolean };
  readonly stderr: Writable & { readonly isTTY?: boolean };
  /** In [0, 1), for the jitter of retries. */
  readonly random: () => number;
  /** Resolves when the process has been asked to stop. */
  readonly stopAsked: Promise<void>;
}

/** Exit statuses: done, a finding to branch on, wrong usage or configuration, failed. */
export const EXIT = { done: 0, finding: 1, usage: 2, failed: 3 } as const;

/** Ends a command with a message for its user and an exit status; never a stack trace. */
export class CommandError extends Error {
  override readonly name = 'CommandError';
  readonly exit: 2 | 3;

  constructor(message: string, exit: 2 | 3) {
    super(message);
    this.exit = exit;
  }
}

export function printLine(stream: Writable, text: string): void {
  stream.write(`${text}\n`);
}

/** Lets timers and sockets have their turn between two pieces of work. */
export function breathe(): Promise<void> {
  return new Promise((resolve) => setImmediate(resolve));
}
