import { IntakeFailure } from '../failure.ts';
import { sharedTextLimit } from '../limits.ts';

/** Bytes that are set aside at once. */
const pageBytes = 1_048_576;

/** The texts that cells share, as UTF-8 in pages with the place of each: an object for each would take far more. */
export class SharedStrings {
  readonly #pages: Buffer[] = [];
  /** Page and bounds of each text. */
  #places = new Uint32Array(3 * 1024);
  #count = 0;
  /** Bytes that are taken in the last page. */
  #used = pageBytes;
  #bytes = 0;

  get count(): number {
    return this.#count;
  }

  /** @throws IntakeFailure where they are more than can be kept */
  add(text: string): void {
    const length = Buffer.byteLength(text);
    this.#bytes += length + 8;
    if (this.#bytes > sharedTextLimit) throw tooMany();
    if (this.#used + length > pageBytes || this.#pages.length === 0) {
      this.#pages.push(Buffer.allocUnsafe(Math.max(pageBytes, length)));
      this.#used = 0;
    }
    const page = this.#pages.length - 1;
    (this.#pages[page] as Buffer).write(text, this.#used);
    this.#place(page, this.#used, this.#used + length);
    this.#used += length;
  }

  #place(page: number, start: number, end: number): void {
    const at = this.#count * 3;
    if (at + 3 > this.#places.length) {
      const larger = new Uint32Array(this.#places.length * 2);
      larger.set(this.#places);
      this.#places = larger;
    }
    this.#places[at] = page;
    this.#places[at + 1] = start;
    this.#places[at + 2] = end;
    this.#count += 1;
  }

  /** Hands out where a text lies; `index` is below `count`. */
  find(index: number, take: (page: Buffer, start: number, end: number) => void): void {
    const at = index * 3;
    const places = this.#places;
    const page = this.#pages[places[at] as number] as Buffer;
    take(page, places[at + 1] as number, places[at + 2] as number);
  }
}

function tooMany(): IntakeFailure {
  const megabytes = sharedTextLimit / 1_048_576;
  return new IntakeFailure(
    'unpacks-too-large',
    `The texts that the cells of the workbook share take more than ${megabytes} MiB.`,
    'Export the log as CSV and upload that.',
  );
}
