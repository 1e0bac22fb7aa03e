import { crc32, deflateRawSync } from 'node:zlib';

export interface ZipOptions {
  /** Sizes and checksum behind the bytes, as writers do that do not know them before. */
  descriptor?: 'with-signature' | 'without-signature' | 'of-64-bits';
  /** Sizes in the extra field of 64 bits. */
  zip64?: boolean;
  isStored?: boolean;
  isEncrypted?: boolean;
  /** Changes the checksum that is told. */
  wrongCrc?: boolean;
  /** Leaves out the directory at the end. */
  withoutDirectory?: boolean;
}

/** A zip archive made by hand after PKWARE's APPNOTE.TXT 6.3.10, in the forms that common writers do not make. */
export function zipOf(parts: Record<string, string | Buffer>, options: ZipOptions = {}): Buffer {
  const entries = Object.entries(parts).map(([name, content]) =>
    entryOf(name, Buffer.from(content as string), options),
  );
  if (options.withoutDirectory) return Buffer.concat(entries.map(({ local }) => local));
  let at = 0;
  const directory = entries.map(({ local, central }) => {
    central.writeUInt32LE(at, 42);
    at += local.length;
    return central;
  });
  const end = Buffer.alloc(22);
  end.writeUInt32LE(0x06054b50, 0);
  end.writeUInt16LE(entries.length, 8);
  end.writeUInt16LE(entries.length, 10);
  end.writeUInt32LE(Buffer.concat(directory).length, 12);
  end.writeUInt32LE(at, 16);
  return Buffer.concat([...entries.map(({ local }) => local), ...directory, end]);
}

function entryOf(name: string, content: Buffer, options: ZipOptions) {
  const packed = options.isStored ? content : deflateRawSync(content);
  const crc = (crc32(content) ^ (options.wrongCrc ? 1 : 0)) >>> 0;
  const { descriptor, zip64 = false } = options;
  const flags = 0x800 | (descriptor ? 8 : 0) | (options.isEncrypted ? 1 : 0);
  const extra = zip64 ? largeSizes(content.length, packed.length) : Buffer.alloc(0);
  const fixed = Buffer.alloc(30);
  fixed.writeUInt32LE(0x04034b50, 0);
  fixed.writeUInt16LE(zip64 ? 45 : 20, 4);
  fixed.writeUInt16LE(flags, 6);
  fixed.writeUInt16LE(options.isStored ? 0 : 8, 8);
  if (!descriptor) {
    fixed.writeUInt32LE(crc, 14);
    fixed.writeUInt32LE(zip64 ? 0xffffffff : packed.length, 18);
    fixed.writeUInt32LE(zip64 ? 0xffffffff : content.length, 22);
  }
  fixed.writeUInt16LE(Buffer.byteLength(name), 26);
  fixed.writeUInt16LE(extra.length, 28);
  const behind = descriptor ? descriptorOf(descriptor, crc, packed.length, content.length) : [];
  const central = Buffer.alloc(46);
  central.writeUInt32LE(0x02014b50, 0);
  fixed.copy(central, 6, 4, 28);
  central.writeUInt32LE(crc, 16);
  central.writeUInt32LE(packed.length, 20);
  central.writeUInt32LE(content.length, 24);
  return {
    local: Buffer.concat([fixed, Buffer.from(name), extra, packed, ...behind]),
    central: Buffer.concat([central, Buffer.from(name)]),
  };
}

function largeSizes(unpacked: number, packed: number): Buffer {
  const field = Buffer.alloc(20);
  field.writeUInt16LE(1, 0);
  field.writeUInt16LE(16, 2);
  field.writeBigUInt64LE(BigInt(unpacked), 4);
  field.writeBigUInt64LE(BigInt(packed), 12);
  return field;
}

function descriptorOf(
  kind: NonNullable<ZipOptions['descriptor']>,
  crc: number,
  packed: number,
  unpacked: number,
): Buffer[] {
  const words = Buffer.alloc(kind === 'of-64-bits' ? 24 : 16);
  words.writeUInt32LE(0x08074b50, 0);
  words.writeUInt32LE(crc, 4);
  if (kind === 'of-64-bits') {
    words.writeBigUInt64LE(BigInt(packed), 8);
    words.writeBigUInt64LE(BigInt(unpacked), 16);
  } else {
    words.writeUInt32LE(packed, 8);
    words.writeUInt32LE(unpacked, 12);
  }
  return [kind === 'without-signature' ? words.subarray(4) : words];
}
