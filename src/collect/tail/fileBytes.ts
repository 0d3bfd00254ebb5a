import { createHash } from 'node:crypto';
import { open } from 'node:fs/promises';
import type { FileHandle } from 'node:fs/promises';
import type { Fingerprint } from '../../terms/partition.js';

/** A file is known again by at most this many of its first bytes. */
export const FINGERPRINT_BYTES = 1_024;

/** Files kept open at a time, so that one that is removed can still be read to its end. */
const MAX_OPEN_FILES = 256;

export function fingerprintOf(head: Buffer): Fingerprint | null {
  if (head.length === 0) return null;
  return { bytes: head.length, sha256: createHash('sha256').update(head).digest('hex') };
}

/** Something that may be holding a file open. */
export interface OpenFile {
  handle: FileHandle | null;
}

/** Opens files and closes those not used for longest when there are too many. */
export class FilePool {
  private readonly opened = new Set<OpenFile>();

  /** The open file; @throws the system's error when it cannot be opened */
  async use(file: OpenFile, path: string): Promise<FileHandle> {
    file.handle ??= await open(path, 'r');
    this.opened.delete(file);
    this.opened.add(file);
    for (const oldest of this.opened) {
      if (this.opened.size <= MAX_OPEN_FILES) break;
      await this.close(oldest);
    }
    return file.handle;
  }

  async close(file: OpenFile): Promise<void> {
    this.opened.delete(file);
    const { handle } = file;
    file.handle = null;
    await handle?.close();
  }

  async closeAll(): Promise<void> {
    for (const file of [...this.opened].reverse()) await this.close(file);
  }
}

/** Reads up to `length` bytes at `position`; fewer only where the file ends. */
export async function readAt(
  handle: FileHandle,
  buffer: Buffer,
  length: number,
  position: number,
): Promise<Buffer> {
  let filled = 0;
  while (filled < length) {
    const { bytesRead } = await handle.read(buffer, filled, length - filled, position + filled);
    if (bytesRead === 0) break;
    filled += bytesRead;
  }
  return buffer.subarray(0, filled);
}
