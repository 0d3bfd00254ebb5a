import type { FieldPath } from '../types.js';
import type { JsonScanner } from './scanner.js';

/** One wanted key of an object: its value's slot (-1: none), and what is wanted inside it. */
export interface WantedKey {
  readonly name: string;
  readonly bytes: Buffer;
  slot: number;
  inside: WantedKeys | null;
}

/** The keys wanted of one object; few, so that they are compared one by one. */
export class WantedKeys {
  readonly keys: WantedKey[] = [];
  /** Every slot at or below this object: what a later object of the same key wipes. */
  readonly slots: number[] = [];

  /** The wanted key that the scanner has just read; null for any other. */
  find(scanner: JsonScanner): WantedKey | null {
    if (scanner.escaped) {
      const name = scanner.text();
      return this.keys.find((key) => key.name === name) ?? null;
    }
    const { bytes, textStart, textEnd } = scanner;
    for (const key of this.keys) {
      if (sameBytes(key.bytes, bytes, textStart, textEnd)) return key;
    }
    return null;
  }

  add(path: FieldPath, slot: number): void {
    const [name, ...rest] = path;
    if (name === undefined) return;
    this.slots.push(slot);
    let key = this.keys.find((candidate) => candidate.name === name);
    if (key === undefined) {
      key = { name, bytes: Buffer.from(name), slot: -1, inside: null };
      this.keys.push(key);
    }
    if (rest.length === 0) key.slot = slot;
    else (key.inside ??= new WantedKeys()).add(rest, slot);
  }
}

function sameBytes(key: Buffer, bytes: Buffer, start: number, end: number): boolean {
  if (key.length !== end - start) return false;
  for (let i = 0; i < key.length; i += 1) if (key[i] !== bytes[start + i]) return false;
  return true;
}
