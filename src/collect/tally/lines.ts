import { isUtf8 } from 'node:buffer';

/** Told of every line, in order. Offsets count the partition's bytes; ends are left out. */
export interface LineSink {
  line(bytes: Buffer, start: number, end: number, offset: number): void;
  /** A line that is not valid UTF-8, or longer than allowed; each told once. */
  refused(reason: 'invalid-utf-8' | 'line-too-long'): void;
}

const NEWLINE = 0x0a;
const RETURN = 0x0d;

/**
 * Cuts a partition's bytes into lines at `\n` or `\r\n`, however the bytes are chunked. A line
 * over the limit is told once and skipped without being kept. Blank lines are no records.
 */
export class Lines {
  private readonly maxLineBytes: number;
  private readonly sink: LineSink;
  /** The start of a line whose end has not come yet; at most `maxLineBytes` + 1 bytes. */
  private partial: Buffer = Buffer.alloc(0);
  private offset: number;
  private skipping: boolean;

  /** @param from bytes already taken, and whether they ended inside a line over the limit */
  constructor(
    maxLineBytes: number,
    sink: LineSink,
    from: { readonly offset: number; readonly insideLongLine: boolean },
  ) {
    this.maxLineBytes = maxLineBytes;
    this.sink = sink;
    this.offset = from.offset;
    this.skipping = from.insideLongLine;
  }

  /** Bytes taken in, whole lines or not. */
  get readBytes(): number {
    return this.offset + this.partial.length;
  }

  /** Bytes up to the end of the last whole line, or of what was skipped. */
  get lineBytes(): number {
    return this.offset;
  }

  /** The next byte belongs to a line over the limit that was told already. */
  get insideLongLine(): boolean {
    return this.skipping;
  }

  /** Takes the next bytes; they may be reused by the caller afterwards. */
  feed(chunk: Buffer): void {
    const start = this.headOfChunk(chunk);
    if (start === chunk.length) return;
    const end = chunk.lastIndexOf(NEWLINE) + 1;
    if (end > start) this.wholeLines(chunk, start, end);
    if (end < chunk.length) this.keep(chunk.subarray(Math.max(start, end)));
  }

  /** The end of input: what is left over is a line. */
  finish(): void {
    const rest = this.partial;
    this.partial = Buffer.alloc(0);
    if (rest.length > 0) this.oneLine(rest, 0, rest.length, rest.length, !isUtf8(rest));
    this.skipping = false;
  }

  /** Finishes the line that was begun; returns where in the chunk the next line starts. */
  private headOfChunk(chunk: Buffer): number {
    if (this.partial.length === 0 && !this.skipping) return 0;
    const newline = chunk.indexOf(NEWLINE);
    if (newline < 0) {
      this.keep(chunk);
      return chunk.length;
    }
    const next = newline + 1;
    if (this.skipping) {
      this.skipping = false;
      this.offset += next;
    } else {
      const line = Buffer.concat([this.partial, chunk.subarray(0, newline)]);
      this.partial = Buffer.alloc(0);
      this.oneLine(line, 0, line.length, line.length + 1, !isUtf8(line));
    }
    return next;
  }

  private wholeLines(chunk: Buffer, from: number, to: number): void {
    // A newline is never part of a longer UTF-8 sequence, so one check serves all lines.
    const suspicious = !isUtf8(chunk.subarray(from, to));
    let start = from;
    while (start < to) {
      const end = chunk.indexOf(NEWLINE, start);
      const broken = suspicious && !isUtf8(chunk.subarray(start, end));
      this.oneLine(chunk, start, end, end + 1 - start, broken);
      start = end + 1;
    }
  }

  /** @param taken bytes of the line with its end */
  private oneLine(
    bytes: Buffer,
    start: number,
    newline: number,
    taken: number,
    broken: boolean,
  ): void {
    const offset = this.offset;
    const end = newline > start && bytes[newline - 1] === RETURN ? newline - 1 : newline;
    this.offset += taken;
    if (end - start > this.maxLineBytes) this.sink.refused('line-too-long');
    else if (broken) this.sink.refused('invalid-utf-8');
    else if (!isBlank(bytes, start, end)) this.sink.line(bytes, start, end, offset);
  }

  /** Keeps the start of a line, or gives it up when it can only be too long. */
  private keep(bytes: Buffer): void {
    if (this.skipping) {
      this.offset += bytes.length;
      return;
    }
    const length = this.partial.length + bytes.length;
    // One byte over is still allowed while it may be the first of `\r\n`.
    const overBytes = length - this.maxLineBytes;
    if (overBytes > 1 || (overBytes === 1 && bytes[bytes.length - 1] !== RETURN)) {
      this.partial = Buffer.alloc(0);
      this.skipping = true;
      this.offset += length;
      this.sink.refused('line-too-long');
    } else {
      this.partial = Buffer.concat([this.partial, bytes]);
    }
  }
}

function isBlank(bytes: Buffer, start: number, end: number): boolean {
  for (let i = start; i < end; i += 1) {
    const byte = bytes[i];
    if (byte !== 0x20 && byte !== 0x09 && byte !== RETURN) return false;
  }
  return true;
}
