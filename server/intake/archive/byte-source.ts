/** The bytes of a file that is read from front to back, as many at a time as are wanted. */
export class ByteSource {
  /** Bytes taken from the file so far. */
  taken = 0;
  readonly #blocks: AsyncIterator<Buffer>;
  #block: Buffer = Buffer.alloc(0);
  #at = 0;

  constructor(blocks: AsyncIterable<Buffer>) {
    this.#blocks = blocks[Symbol.asyncIterator]();
  }

  /** The next bytes, at least one and at most so many; null at the end of the file. */
  async next(most: number): Promise<Buffer | null> {
    while (this.#at === this.#block.length) {
      const block = await this.#blocks.next();
      if (block.done) return null;
      this.#block = block.value;
      this.#at = 0;
    }
    const bytes = this.#block.subarray(this.#at, this.#at + most);
    this.#at += bytes.length;
    this.taken += bytes.length;
    return bytes;
  }

  /** Takes back the last bytes of what `next` gave last. */
  giveBack(count: number): void {
    this.#at -= count;
    this.taken -= count;
  }

  /** Exactly so many bytes; null where the file ends before. */
  async exactly(count: number): Promise<Buffer | null> {
    const parts: Buffer[] = [];
    for (let left = count; left > 0;) {
      const part = await this.next(left);
      if (part === null) return null;
      parts.push(part);
      left -= part.length;
    }
    return parts.length === 1 ? (parts[0] as Buffer) : Buffer.concat(parts);
  }

  async close(): Promise<void> {
    await this.#blocks.return?.();
  }
}
