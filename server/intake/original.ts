import { and, asc, eq, gt } from 'drizzle-orm';
import { Readable } from 'node:stream';
import { createGunzip, type ZlibOptions } from 'node:zlib';
import type { Database } from '../db/client.ts';
import { uploadChunk } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';

/** Which upload, of which site and organisation. */
export interface UploadKey {
  organisationId: number;
  siteId: number;
  uploadId: number;
}

/** Bytes of the original that are handed on at once. */
const blockBytes = 262_144;
/** Chunks that are fetched while the one before is unpacked. */
const chunksAhead = 2;

/**
 * The original file of an upload, as it came, block by block; no more than a few blocks are in memory.
 *
 * @throws where the kept bytes are damaged
 */
export async function* readOriginal(db: Database, key: UploadKey): AsyncGenerator<Buffer> {
  const packed = Readable.from(readChunks(db, key), { highWaterMark: chunksAhead });
  const gunzip = createGunzip({
    chunkSize: blockBytes,
    highWaterMark: 2 * blockBytes,
  } as ZlibOptions);
  packed.on('error', (error) => gunzip.destroy(error));
  try {
    for await (const block of packed.pipe(gunzip)) yield block as Buffer;
  } finally {
    packed.destroy();
    gunzip.destroy();
  }
}

async function* readChunks(db: Database, key: UploadKey): AsyncGenerator<Buffer> {
  for (let last = 0; ;) {
    const chunk = await readChunkAfter(db, key, last);
    if (!chunk) return;
    yield chunk.bytes;
    last = chunk.number;
  }
}

function readChunkAfter(db: Database, key: UploadKey, last: number) {
  return withTenant(db, key.organisationId, async (tx) => {
    const [chunk] = await tx
      .select({ number: uploadChunk.number, bytes: uploadChunk.bytes })
      .from(uploadChunk)
      .where(
        and(
          eq(uploadChunk.organisationId, key.organisationId),
          eq(uploadChunk.siteId, key.siteId),
          eq(uploadChunk.uploadId, key.uploadId),
          gt(uploadChunk.number, last),
        ),
      )
      .orderBy(asc(uploadChunk.number))
      .limit(1);
    return chunk;
  });
}
