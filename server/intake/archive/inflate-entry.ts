import { createInflateRaw, type InflateRaw, type ZlibOptions } from 'node:zlib';
import type { ByteSource } from './byte-source.ts';
import { brokenOff, damaged } from './zip-failure.ts';

/** Bytes that are handed on at once; as many again are unpacked ahead. */
const blockBytes = 131_072;

/**
 * Unpacks deflated bytes (RFC 1951) from a source up to their own end, and leaves in it what follows.
 *
 * @param packedBytes how many they are, Infinity where only their end tells
 * @param name of the entry, for a sentence
 * @returns by the generator, how many packed bytes there were
 * @throws IntakeFailure where they are damaged or break off
 */
export async function* inflateEntry(
  source: ByteSource,
  packedBytes: number,
  name: string,
): AsyncGenerator<Buffer, number> {
  const inflate = createInflateRaw({
    chunkSize: blockBytes,
    highWaterMark: 2 * blockBytes,
  } as ZlibOptions);
  const feeding = feed(inflate, source, packedBytes);
  // It is awaited below; until then a failure must not count as unhandled.
  feeding.catch(() => undefined);
  try {
    for await (const block of inflate) yield block as Buffer;
    return await feeding;
  } catch (error) {
    throw isOfZlib(error) ? damaged(name) : error;
  } finally {
    inflate.destroy();
    await feeding.catch(() => undefined);
  }
}

async function feed(inflate: InflateRaw, source: ByteSource, packedBytes: number): Promise<number> {
  let fed = 0;
  while (fed < packedBytes && !inflate.destroyed) {
    const block = await nextOf(source, packedBytes - fed, inflate);
    fed += block.length;
    await written(inflate, block);
    if (inflate.bytesWritten < fed) break;
  }
  if (inflate.bytesWritten < fed) source.giveBack(fed - inflate.bytesWritten);
  else inflate.end();
  return inflate.bytesWritten;
}

async function nextOf(source: ByteSource, most: number, inflate: InflateRaw): Promise<Buffer> {
  try {
    const block = await source.next(most);
    if (block) return block;
    throw brokenOff();
  } catch (error) {
    inflate.destroy(error as Error);
    throw error;
  }
}

/** Resolves once a block is unpacked, or nobody wants it any more. */
function written(inflate: InflateRaw, block: Buffer): Promise<void> {
  return new Promise((resolve) => {
    inflate.once('close', resolve);
    inflate.write(block, () => {
      inflate.off('close', resolve);
      resolve();
    });
  });
}

const isOfZlib = (error: unknown): boolean =>
  error instanceof Error && 'code' in error && String(error.code).startsWith('Z_');
