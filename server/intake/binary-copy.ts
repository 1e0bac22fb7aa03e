import type { Decimal } from './decimal.ts';

/** Signature, flags and length of the header's extension: what PostgreSQL's binary COPY begins with. */
const signature = Buffer.from('PGCOPY\n\xff\r\n\0\0\0\0\0\0\0\0\0', 'latin1');
const trailerBytes = 2;
/** PostgreSQL counts timestamps from 2000-01-01. */
const microsOf2000 = Date.UTC(2000, 0, 1) * 1000;
const highWord = 2 ** 32;
/** Room that is always left for fields of fixed length, so that they need no check. */
const headroom = 512;

/**
 * Rows in the binary format of PostgreSQL's COPY (its documentation, "COPY", section "Binary Format"):
 * numbers and moments need no text on either side.
 */
export class BinaryCopy {
  #bytes: Buffer;
  #at = 0;
  rows = 0;

  constructor(capacity: number) {
    this.#bytes = Buffer.allocUnsafe(capacity);
    this.clear();
  }

  get length(): number {
    return this.#at;
  }

  clear(): void {
    signature.copy(this.#bytes, 0);
    this.#at = signature.length;
    this.rows = 0;
  }

  /** All rows so far with the trailer, ready to be sent; valid until the next row or `clear`. */
  finish(): Buffer {
    this.#reserve(trailerBytes);
    this.#bytes.writeInt16BE(-1, this.#at);
    return this.#bytes.subarray(0, this.#at + trailerBytes);
  }

  beginRow(fields: number): void {
    this.#reserve(headroom);
    this.#at = this.#bytes.writeInt16BE(fields, this.#at);
    this.rows += 1;
  }

  null(): void {
    this.#reserve(headroom);
    this.#at = this.#bytes.writeInt32BE(-1, this.#at);
  }

  int4(value: number): void {
    this.#reserve(headroom);
    this.#int32(4);
    this.#int32(value);
  }

  int2(value: number): void {
    this.#reserve(headroom);
    this.#int32(2);
    this.#at = this.#bytes.writeInt16BE(value, this.#at);
  }

  /** @param micros microseconds since 1970 UTC, NaN for none */
  timestamp(micros: number): void {
    if (Number.isNaN(micros)) return this.null();
    this.#reserve(headroom);
    const since2000 = micros - microsOf2000;
    const high = Math.floor(since2000 / highWord);
    this.#int32(8);
    this.#int32(high);
    this.#int32((since2000 - high * highWord) | 0);
  }

  /** Text in UTF-8, without zero bytes. */
  bytes(from: Buffer, start: number, end: number): void {
    const length = end - start;
    this.#reserve(length + headroom);
    this.#int32(length);
    if (length > 48) from.copy(this.#bytes, this.#at, start, end);
    else for (let i = 0; i < length; i++) this.#bytes[this.#at + i] = from[start + i] as number;
    this.#at += length;
  }

  text(text: string): void {
    const encoded = Buffer.from(text);
    this.bytes(encoded, 0, encoded.length);
  }

  textOrNull(text: string | null): void {
    if (text === null) this.null();
    else this.text(text);
  }

  /** A numeric that is a whole number below ten thousand. */
  smallWhole(value: number): void {
    this.#reserve(headroom);
    const groups = value === 0 ? 0 : 1;
    this.#int32(8 + groups * 2);
    this.#int32(groups << 16);
    this.#int32(0);
    if (groups > 0) this.#at = this.#bytes.writeInt16BE(value, this.#at);
  }

  /** Groups of four decimal digits, the place of the first, the sign, and the digits behind the point. */
  numeric({ isNegative, whole, fraction }: Decimal): void {
    const wholeGroups = Math.ceil(whole.length / 4);
    const digits =
      whole.padStart(wholeGroups * 4, '0') +
      fraction.padEnd(Math.ceil(fraction.length / 4) * 4, '0');
    const groups = (digits.match(/\d{4}/g) ?? []).map(Number);
    while (groups.at(-1) === 0) groups.pop();
    const leading = groups.findIndex((group) => group !== 0);
    const kept = leading > 0 ? groups.slice(leading) : groups;
    this.#reserve(headroom);
    this.#int32(8 + kept.length * 2);
    const isZero = kept.length === 0;
    const weight = isZero ? 0 : wholeGroups - 1 - leading;
    const sign = isNegative && !isZero ? 0x4000 : 0;
    for (const field of [kept.length, weight, sign, fraction.length, ...kept]) {
      this.#at = this.#bytes.writeInt16BE(field, this.#at);
    }
  }

  #int32(value: number): void {
    const bytes = this.#bytes;
    const at = this.#at;
    bytes[at] = value >>> 24;
    bytes[at + 1] = value >>> 16;
    bytes[at + 2] = value >>> 8;
    bytes[at + 3] = value;
    this.#at = at + 4;
  }

  #reserve(length: number): void {
    if (this.#at + length <= this.#bytes.length) return;
    const larger = Buffer.allocUnsafe(Math.max(this.#bytes.length * 2, this.#at + length));
    this.#bytes.copy(larger, 0, 0, this.#at);
    this.#bytes = larger;
  }
}
