/** What stands before the bytes of an entry in a zip archive (APPNOTE.TXT 6.3.10, section 4.3.7). */
export interface EntryHeader {
  name: string;
  method: 'stored' | 'deflated' | 'other';
  isEncrypted: boolean;
  /** Whether the sizes and the checksum stand behind the bytes, in a data descriptor. */
  hasDescriptor: boolean;
  crc32: number;
  packedBytes: number;
  unpackedBytes: number;
}

/** Bytes of the fixed part behind the signature. */
export const entryHeaderBytes = 26;

const encrypted = 1;
const descriptorFollows = 8;
const nameIsUtf8 = 0x800;
const zip64 = 0x0001;
const inZip64 = 0xffffffff;

/** Lengths of the name and of the extra fields that follow the fixed part. */
export const tailLengths = (fixed: Buffer): { name: number; extra: number } => ({
  name: fixed.readUInt16LE(22),
  extra: fixed.readUInt16LE(24),
});

/**
 * Reads the header of an entry.
 *
 * @param fixed its fixed part, behind the signature
 * @param tail the name and the extra fields
 * @returns null where the sizes are not where they have to be
 */
export function readEntryHeader(fixed: Buffer, tail: Buffer): EntryHeader | null {
  const flags = fixed.readUInt16LE(2);
  const method = fixed.readUInt16LE(4);
  const { name } = tailLengths(fixed);
  const sizes = { packed: fixed.readUInt32LE(14), unpacked: fixed.readUInt32LE(18) };
  const hasDescriptor = (flags & descriptorFollows) !== 0;
  const isLarge = sizes.packed === inZip64 || sizes.unpacked === inZip64;
  const large = isLarge ? largeSizes(tail.subarray(name), sizes) : sizes;
  if (large === null && !hasDescriptor) return null;
  return {
    name: tail
      .toString((flags & nameIsUtf8) === 0 ? 'latin1' : 'utf8', 0, name)
      .replaceAll('\\', '/')
      .replace(/^\/+/, ''),
    method: method === 8 ? 'deflated' : method === 0 ? 'stored' : 'other',
    isEncrypted: (flags & encrypted) !== 0,
    hasDescriptor,
    crc32: fixed.readUInt32LE(10),
    packedBytes: large?.packed ?? 0,
    unpackedBytes: large?.unpacked ?? 0,
  };
}

/** Sizes of 64 bits stand in an extra field, those only that have no room in the fixed part. */
function largeSizes(
  extra: Buffer,
  sizes: { packed: number; unpacked: number },
): { packed: number; unpacked: number } | null {
  for (let at = 0; at + 4 <= extra.length; at += 4 + extra.readUInt16LE(at + 2)) {
    if (extra.readUInt16LE(at) !== zip64) continue;
    const field = extra.subarray(at + 4, at + 4 + extra.readUInt16LE(at + 2));
    const wanted = [sizes.unpacked, sizes.packed].filter((size) => size === inZip64).length;
    if (field.length < wanted * 8) return null;
    const unpacked = sizes.unpacked === inZip64 ? readSize(field, 0) : sizes.unpacked;
    const behind = sizes.unpacked === inZip64 ? 8 : 0;
    return { unpacked, packed: sizes.packed === inZip64 ? readSize(field, behind) : sizes.packed };
  }
  return null;
}

/** A size of 64 bits; beyond 2^53 it is no size of any file that is taken. */
export const readSize = (bytes: Buffer, at: number): number => Number(bytes.readBigUInt64LE(at));
