/** Containers nested deeper than this make a record malformed: a bound on the walk's memory. */
const MAX_DEPTH = 1_000;

const QUOTE = 0x22;
const BACKSLASH = 0x5c;
const COMMA = 0x2c;
const COLON = 0x3a;
const OPEN_BRACE = 0x7b;
const CLOSE_BRACE = 0x7d;
const OPEN_BRACKET = 0x5b;
const MINUS = 0x2d;
const ZERO = 0x30;

/** What a byte means inside a string: 0 plain ASCII, 1 part of a longer character, 2 a stop. */
const IN_STRING = new Uint8Array(256);
const STOP = 2;
IN_STRING.fill(1, 0x80);
IN_STRING.fill(STOP, 0, 0x20);
IN_STRING[QUOTE] = STOP;
IN_STRING[BACKSLASH] = STOP;

/** What may follow a backslash besides `u` (RFC 8259, section 7). */
const ESCAPED = new Set(Array.from('"\\/bfnrt', (letter) => letter.charCodeAt(0)));

function isDigit(byte: number): boolean {
  return byte >= ZERO && byte <= 0x39;
}

function isHex(byte: number): boolean {
  return isDigit(byte) || (byte >= 0x41 && byte <= 0x46) || (byte >= 0x61 && byte <= 0x66);
}

/**
 * A cursor over JSON text (RFC 8259) in bytes of valid UTF-8. Each method that reads something
 * starts at `at`, leaves `at` behind it, and returns false where the grammar is broken.
 */
export class JsonScanner {
  bytes: Buffer = Buffer.alloc(0);
  at = 0;
  end = 0;
  /** Of the string read last: where its text is, and whether it holds an escape or non-ASCII. */
  textStart = 0;
  textEnd = 0;
  escaped = false;
  ascii = true;
  private readonly nesting = new Uint8Array(MAX_DEPTH);

  reset(bytes: Buffer, start: number, end: number): void {
    this.bytes = bytes;
    this.at = start;
    this.end = end;
  }

  /** The byte at the cursor; 0, which no grammar rule takes, at the end. */
  peek(): number {
    return this.at < this.end ? (this.bytes[this.at] ?? 0) : 0;
  }

  skipSpace(): void {
    while (this.at < this.end) {
      const byte = this.bytes[this.at];
      if (byte !== 0x20 && byte !== 0x09 && byte !== 0x0a && byte !== 0x0d) return;
      this.at += 1;
    }
  }

  /** Reads `"…"` and notes where its text lies. */
  string(): boolean {
    if (this.peek() !== QUOTE) return false;
    const { bytes, end } = this;
    let at = this.at + 1;
    this.textStart = at;
    this.escaped = false;
    this.ascii = true;
    while (at < end) {
      const byte = bytes[at] ?? 0;
      const meaning = IN_STRING[byte];
      if (meaning === 0) at += 1;
      else if (byte === QUOTE) {
        this.textEnd = at;
        this.at = at + 1;
        return true;
      } else if (meaning !== STOP) {
        this.ascii = false;
        at += 1;
      } else {
        at = this.escapeEnd(at);
        if (at < 0) return false;
      }
    }
    return false;
  }

  /** The text of the string read last; escapes that make no character become U+FFFD. */
  text(): string {
    const { bytes, textStart, textEnd } = this;
    if (!this.escaped) return bytes.toString(this.ascii ? 'latin1' : 'utf8', textStart, textEnd);
    const parsed: unknown = JSON.parse(bytes.toString('utf8', textStart - 1, textEnd + 1));
    return Buffer.from(String(parsed)).toString();
  }

  /** Reads `"key" :` and the space around; `text…` then tell about the key. */
  key(): boolean {
    if (!this.string()) return false;
    this.skipSpace();
    if (this.peek() !== COLON) return false;
    this.at += 1;
    this.skipSpace();
    return true;
  }

  number(): boolean {
    if (this.peek() === MINUS) this.at += 1;
    const first = this.peek();
    if (!isDigit(first)) return false;
    this.at += 1;
    if (first !== ZERO) this.digits();
    if (this.peek() === 0x2e) {
      this.at += 1;
      if (!this.digits()) return false;
    }
    if ((this.peek() | 0x20) !== 0x65) return true;
    this.at += 1;
    if (this.peek() === 0x2b || this.peek() === MINUS) this.at += 1;
    return this.digits();
  }

  literal(word: string): boolean {
    for (let i = 0; i < word.length; i += 1) {
      if (this.peek() !== word.charCodeAt(i)) return false;
      this.at += 1;
    }
    return true;
  }

  /** Reads any value and forgets it; containers without recursion. */
  skipValue(): boolean {
    if (this.peek() === QUOTE) return this.string();
    let depth = 0;
    for (;;) {
      const byte = this.peek();
      if (byte === OPEN_BRACE || byte === OPEN_BRACKET) {
        if (depth === MAX_DEPTH) return false;
        this.nesting[depth] = byte;
        depth += 1;
        this.at += 1;
        this.skipSpace();
        // An empty container is a finished value; `afterValue` closes it.
        if (this.peek() !== byte + 2) {
          if (byte === OPEN_BRACE && !this.key()) return false;
          continue;
        }
      } else if (!this.skipScalar(byte)) return false;
      depth = this.afterValue(depth);
      if (depth <= 0) return depth === 0;
    }
  }

  private skipScalar(byte: number): boolean {
    if (byte === QUOTE) return this.string();
    if (byte === 0x74) return this.literal('true');
    if (byte === 0x66) return this.literal('false');
    if (byte === 0x6e) return this.literal('null');
    return this.number();
  }

  /**
   * Closes what ends here and steps over a comma to the next value.
   *
   * @returns containers still open, 0 when the value is whole, -1 where the grammar is broken
   */
  private afterValue(open: number): number {
    let depth = open;
    while (depth > 0) {
      this.skipSpace();
      const container = this.nesting[depth - 1] ?? 0;
      const byte = this.peek();
      if (byte === COMMA) {
        this.at += 1;
        this.skipSpace();
        return container === OPEN_BRACE && !this.key() ? -1 : depth;
      }
      // In ASCII each closing bracket stands two places after its opening one.
      if (byte !== container + 2) return -1;
      this.at += 1;
      depth -= 1;
    }
    return 0;
  }

  private digits(): boolean {
    const start = this.at;
    while (isDigit(this.peek())) this.at += 1;
    return this.at > start;
  }

  /** Where the escape at `at` ends; -1 when it is none. */
  private escapeEnd(at: number): number {
    if (this.bytes[at] !== BACKSLASH || at + 1 >= this.end) return -1;
    this.escaped = true;
    const letter = this.bytes[at + 1] ?? 0;
    if (ESCAPED.has(letter)) return at + 2;
    if (letter !== 0x75 || at + 6 > this.end) return -1;
    for (let i = at + 2; i < at + 6; i += 1) if (!isHex(this.bytes[i] ?? 0)) return -1;
    return at + 6;
  }
}

export const BYTE = { QUOTE, COMMA, OPEN_BRACE, CLOSE_BRACE, OPEN_BRACKET } as const;
