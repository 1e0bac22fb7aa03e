import { crc32 } from 'node:zlib';
import { ByteSource } from './byte-source.ts';
import {
  entryHeaderBytes,
  readEntryHeader,
  readSize,
  tailLengths,
  type EntryHeader,
} from './entry-header.ts';
import { inflateEntry } from './inflate-entry.ts';
import { UnpackBudget } from './unpack-budget.ts';
import { brokenOff, damaged, protectedArchive, unknownPacking } from './zip-failure.ts';

const signature = {
  entry: 0x04034b50,
  descriptor: 0x08074b50,
  directory: 0x02014b50,
  directoryEnd: 0x06054b50,
} as const;

/** One entry of an archive. What is not read of it is passed over before the next one. */
export interface ZipEntry {
  name: string;
  /** Its bytes, unpacked; they can be read once, and reading may stop anywhere. */
  blocks(): AsyncIterable<Buffer>;
}

/**
 * Reads a zip archive from front to back (PKWARE APPNOTE.TXT 6.3.10), with data descriptors and sizes of 64
 * bits. Each entry that is unpacked is held to its checksum and its sizes.
 */
export class ZipReader {
  readonly #source: ByteSource;
  readonly #budget = new UnpackBudget();

  constructor(blocks: AsyncIterable<Buffer>) {
    this.#source = new ByteSource(blocks);
  }

  /** Bytes of the archive that were read so far. */
  get taken(): number {
    return this.#source.taken;
  }

  /**
   * The entries in the order in which they lie in the archive.
   *
   * @throws IntakeFailure where it is damaged, breaks off, is protected, or unpacks to too much
   */
  async *entries(): AsyncGenerator<ZipEntry> {
    const source = this.#source;
    let entries = 0;
    try {
      for (;;) {
        const mark = (await source.exactly(4))?.readUInt32LE(0);
        if (mark === undefined) throw brokenOff();
        if (mark === signature.directory || mark === signature.directoryEnd) {
          await readToEnd(source, mark, entries);
          return;
        }
        if (mark !== signature.entry) throw damaged();
        entries += 1;
        yield* this.#entry(await this.#header());
      }
    } finally {
      await source.close();
    }
  }

  /** Reads the rest of the file without looking at it. */
  async drain(): Promise<void> {
    while (await this.#source.next(Infinity));
  }

  async #header(): Promise<EntryHeader> {
    const fixed = await this.#source.exactly(entryHeaderBytes);
    if (fixed === null) throw brokenOff();
    const { name, extra } = tailLengths(fixed);
    const tail = await this.#source.exactly(name + extra);
    if (tail === null) throw brokenOff();
    const header = readEntryHeader(fixed, tail);
    if (header === null) throw damaged();
    if (header.isEncrypted) throw protectedArchive();
    return header;
  }

  async *#entry(header: EntryHeader): AsyncGenerator<ZipEntry> {
    const content = this.#content(header);
    let isRead = false;
    // Without `return`, a loop that breaks leaves the rest to be passed over below.
    const next = () => {
      isRead = true;
      return content.next();
    };
    try {
      yield { name: header.name, blocks: () => ({ [Symbol.asyncIterator]: () => ({ next }) }) };
      if (!isRead && !header.hasDescriptor) await this.#pass(header.packedBytes);
      else while (!(await content.next()).done);
    } finally {
      await content.return(undefined);
    }
  }

  async #pass(bytes: number): Promise<void> {
    for (let left = bytes; left > 0;) {
      const block = await this.#source.next(left);
      if (block === null) throw brokenOff();
      left -= block.length;
    }
  }

  /** The bytes of an entry; it goes on to its end even where its reader stops early. */
  async *#content(header: EntryHeader): AsyncGenerator<Buffer> {
    const { name, hasDescriptor } = header;
    const packed = this.#packed(header);
    let crc = 0;
    let unpackedBytes = 0;
    let packedBytes: number;
    try {
      let step = await packed.next();
      for (; !step.done; step = await packed.next()) {
        unpackedBytes += step.value.length;
        this.#budget.spend(step.value.length, this.taken);
        crc = crc32(step.value, crc);
        yield step.value;
      }
      packedBytes = step.value;
    } finally {
      await packed.return(0);
    }
    const told = { crc32: crc, packedBytes, unpackedBytes };
    if (hasDescriptor ? !(await this.#descriptorFits(told)) : !fits(header, told)) {
      throw damaged(name);
    }
  }

  #packed(header: EntryHeader): AsyncGenerator<Buffer, number> {
    const { name, method, hasDescriptor, packedBytes } = header;
    if (method === 'deflated') {
      return inflateEntry(this.#source, hasDescriptor ? Infinity : packedBytes, name);
    }
    // Nothing tells where stored bytes end if their header does not.
    const isFolder = name.endsWith('/');
    if (method === 'other' || (hasDescriptor && !isFolder)) throw unknownPacking(name);
    return this.#stored(packedBytes);
  }

  async *#stored(bytes: number): AsyncGenerator<Buffer, number> {
    for (let left = bytes; left > 0;) {
      const block = await this.#source.next(left);
      if (block === null) throw brokenOff();
      left -= block.length;
      yield block;
    }
    return bytes;
  }

  /** Whether a descriptor follows that says the same; its signature may be missing, its sizes have 32 or 64 bits. */
  async #descriptorFits(told: Told): Promise<boolean> {
    const first = await this.#source.exactly(4);
    const crc =
      first?.readUInt32LE(0) === signature.descriptor ? await this.#source.exactly(4) : first;
    const sizes = await this.#source.exactly(8);
    if (!crc || !sizes) throw brokenOff();
    const crcFits = crc.readUInt32LE(0) === told.crc32;
    if (
      sizes.readUInt32LE(0) === told.packedBytes &&
      sizes.readUInt32LE(4) === told.unpackedBytes
    ) {
      return crcFits;
    }
    const more = await this.#source.exactly(8);
    if (!more) throw brokenOff();
    const isSame =
      readSize(sizes, 0) === told.packedBytes && readSize(more, 0) === told.unpackedBytes;
    return crcFits && isSame;
  }
}

type Told = Pick<EntryHeader, 'crc32' | 'packedBytes' | 'unpackedBytes'>;

const fits = (header: Told, told: Told): boolean =>
  header.crc32 === told.crc32 &&
  header.packedBytes === told.packedBytes &&
  header.unpackedBytes === told.unpackedBytes;

/** Bytes at the end of an archive among which the end of its directory stands, with a comment behind it. */
const endWithin = 22 + 65_535;

/** Reads the directory, which says the same again; only its end is looked for, to know that nothing is missing. */
async function readToEnd(source: ByteSource, first: number, entries: number): Promise<void> {
  let tail = bytesOf(first);
  for (let block = await source.next(Infinity); block; block = await source.next(Infinity)) {
    tail = Buffer.concat([tail, block]).subarray(-endWithin);
  }
  const at = tail.lastIndexOf(bytesOf(signature.directoryEnd));
  if (at < 0 || at + 22 > tail.length) throw brokenOff();
  const told = tail.readUInt16LE(at + 10);
  if (told !== entries && told !== 0xffff) throw damaged();
}

function bytesOf(mark: number): Buffer {
  const bytes = Buffer.alloc(4);
  bytes.writeUInt32LE(mark);
  return bytes;
}
