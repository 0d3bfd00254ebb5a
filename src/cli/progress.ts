import type { Collector } from '../collect/collector.js';
import type { Ports } from './ports.js';

/** Bytes between two looks at a progress line. */
const EVERY_BYTES = 8 * 1024 * 1024;

export interface Progress {
  add(bytes: number): void;
  /** Wipes the line. */
  end(): void;
}

/** A line on standard error that is rewritten while much is read; silent off a terminal. */
export function progress(ports: Pick<Ports, 'stderr'>, collectors: readonly Collector[]): Progress {
  const { stderr } = ports;
  if (stderr.isTTY !== true) return { add: () => undefined, end: () => undefined };
  let read = 0;
  let shown = 0;
  return {
    add: (bytes) => {
      read += bytes;
      if (read - shown < EVERY_BYTES) return;
      shown = read;
      const left = collectors.reduce((sum, c) => sum + (c.lagBytes() ?? 0), 0);
      stderr.write(`\r${megabytes(read)} read, ${megabytes(left)} to go   `);
    },
    end: () => {
      if (shown > 0) stderr.write('\r\u001b[K');
    },
  };
}

function megabytes(bytes: number): string {
  return `${(bytes / 1e6).toFixed(0)} MB`;
}
