const zero = 0x30;
const nine = 0x39;
const space = 0x20;
const tab = 0x09;

/** A place within a cell that moves on over digits and separators. */
export class ByteCursor {
  at = 0;
  /** How many digits the last number had. */
  taken = 0;
  #bytes: Buffer = Buffer.alloc(0);
  #end = 0;

  reset(bytes: Buffer, start: number, end: number): this {
    this.#bytes = bytes;
    this.at = start;
    this.#end = end;
    return this;
  }

  get ended(): boolean {
    return this.at >= this.#end;
  }

  /** The byte at this place, or -1 at the end. */
  peek(): number {
    return this.at < this.#end ? (this.#bytes[this.at] as number) : -1;
  }

  skip(byte: number): boolean {
    if (this.peek() !== byte) return false;
    this.at += 1;
    return true;
  }

  /** Skips a letter, whatever its case; given in lower case. */
  skipLetter(lower: number): boolean {
    if ((this.peek() | 0x20) !== lower) return false;
    this.at += 1;
    return true;
  }

  skipBlanks(): boolean {
    const from = this.at;
    while (this.at < this.#end && (this.peek() === space || this.peek() === tab)) this.at += 1;
    return this.at > from;
  }

  /** Reads a run of at most so many digits; `taken` says how many there were. */
  digits(most: number): number {
    const bytes = this.#bytes;
    const stop = Math.min(this.#end, this.at + most);
    let at = this.at;
    let value = 0;
    while (at < stop) {
      const byte = bytes[at] as number;
      if (byte < zero || byte > nine) break;
      value = value * 10 + byte - zero;
      at += 1;
    }
    this.taken = at - this.at;
    this.at = at;
    return value;
  }

  /** Reads the digits behind a decimal point as millionths; digits from the seventh on are dropped. */
  millionths(): number {
    const value = this.digits(6) * 10 ** (6 - this.taken);
    const taken = this.taken;
    this.digits(Infinity);
    this.taken += taken;
    return value;
  }
}
