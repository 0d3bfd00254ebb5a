import { NOT_SCALAR } from '../types.js';
import type { DecodeReason, Decoder, FieldPath, FieldValue } from '../types.js';
import { BYTE, JsonScanner } from './scanner.js';
import { WantedKeys } from './wanted.js';
import type { WantedKey } from './wanted.js';

/**
 * Reads one JSON object (RFC 8259) a record. The whole line is checked, so that a broken record
 * never counts by what happened to stand before the break.
 *
 * Text of a value: strings decoded, numbers as written (`1.0` stays `1.0`), `true`, `false`;
 * `null` is missing; objects and lists are `NOT_SCALAR`. Of duplicated keys the last wins. Paths
 * walk through objects only; a key that itself holds dots is not looked at.
 */
export function jsonDecoder(wanted: readonly FieldPath[]): Decoder {
  return new JsonDecoder(wanted);
}

class JsonDecoder implements Decoder {
  readonly fields: FieldValue[];
  private readonly root = new WantedKeys();
  private readonly scanner = new JsonScanner();

  constructor(wanted: readonly FieldPath[]) {
    this.fields = wanted.map(() => null);
    wanted.forEach((path, slot) => {
      this.root.add(path, slot);
    });
  }

  decode(bytes: Buffer, start: number, end: number): DecodeReason | null {
    const { scanner } = this;
    scanner.reset(bytes, start, end);
    scanner.skipSpace();
    if (scanner.peek() !== BYTE.OPEN_BRACE || !this.object(this.root)) return 'malformed';
    scanner.skipSpace();
    return scanner.at === end ? null : 'malformed';
  }

  /** Reads the object at the cursor; recursion goes only as deep as the longest path. */
  private object(wanted: WantedKeys): boolean {
    const { scanner } = this;
    for (const slot of wanted.slots) this.fields[slot] = null;
    scanner.at += 1;
    scanner.skipSpace();
    if (scanner.peek() === BYTE.CLOSE_BRACE) {
      scanner.at += 1;
      return true;
    }
    while (scanner.key()) {
      const key = wanted.find(scanner);
      if (!(key === null ? scanner.skipValue() : this.value(key))) return false;
      scanner.skipSpace();
      const byte = scanner.peek();
      scanner.at += 1;
      if (byte === BYTE.CLOSE_BRACE) return true;
      if (byte !== BYTE.COMMA) return false;
      scanner.skipSpace();
    }
    return false;
  }

  private value(key: WantedKey): boolean {
    const byte = this.scanner.peek();
    if (byte === BYTE.OPEN_BRACE && key.inside !== null) {
      if (key.slot >= 0) this.fields[key.slot] = NOT_SCALAR;
      return this.object(key.inside);
    }
    if (key.inside !== null) for (const slot of key.inside.slots) this.fields[slot] = null;
    const start = this.scanner.at;
    if (!this.scanner.skipValue()) return false;
    if (key.slot >= 0) this.fields[key.slot] = this.valueText(byte, start);
    return true;
  }

  /** The text of the value that began with `first` at `start` and ends at the cursor. */
  private valueText(first: number, start: number): FieldValue {
    const { scanner } = this;
    if (first === BYTE.QUOTE) return scanner.text();
    if (first === BYTE.OPEN_BRACE || first === BYTE.OPEN_BRACKET) return NOT_SCALAR;
    if (first === 0x6e) return null;
    return scanner.bytes.toString('latin1', start, scanner.at);
  }
}
