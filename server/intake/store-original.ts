import { createHash } from 'node:crypto';
import { Transform, type Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { createGzip } from 'node:zlib';
import type { Database } from '../db/client.ts';
import { upload, uploadChunk } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import type { HeldReceipt } from './hold-receipt.ts';
import type { UploadKey } from './original.ts';

/** For whom a file is received, and under which id. */
export interface Receipt extends HeldReceipt {
  organisationId: number;
  siteId: number;
  fileName: string;
  receivedAt: Date;
  /** The person, or the machine's key, that handed it over. */
  receivedBy: number | null;
  receivedKey: number | null;
}

export interface StoredOriginal {
  byteSize: number;
  sha256: string;
}

/** Bytes of one chunk, gzipped. */
const chunkBytes = 262_144;
/** Little is gained by packing harder, and receiving would take longer. */
const gzipLevel = 3;

/**
 * Keeps a file while it arrives, gzipped and in chunks, under an upload with the status `receiving`.
 * Each chunk is a transaction of its own: a slow sender holds no connection.
 *
 * @throws what the stream or the database throws; the caller then discards what there is of the file
 */
export async function storeOriginal(
  db: Database,
  receipt: Receipt,
  file: Readable,
): Promise<StoredOriginal> {
  const { uploadId, lost, ...values } = receipt;
  const { organisationId, siteId } = values;
  await withTenant(db, organisationId, (tx) =>
    tx
      .insert(upload)
      .overridingSystemValue()
      .values({ ...values, id: uploadId, status: 'receiving' }),
  );
  const hash = createHash('sha256');
  let byteSize = 0;
  const meter = new Transform({
    transform(block: Buffer, _encoding, done) {
      hash.update(block);
      byteSize += block.length;
      done(null, block);
    },
  });
  const key = { organisationId, siteId, uploadId };
  let broken: unknown;
  const keep = async (packed: AsyncIterable<Buffer>) => {
    try {
      await keepChunks(db, key, packed);
    } catch (error) {
      broken = error;
      throw error;
    }
  };
  await pipeline(file, meter, createGzip({ level: gzipLevel }), keep, { signal: lost }).catch(
    (error: unknown) => {
      // Where the last step fails, a pipeline tells only that the one before it was aborted.
      throw broken ?? error;
    },
  );
  return { byteSize, sha256: hash.digest('hex') };
}

async function keepChunks(
  db: Database,
  key: UploadKey,
  packed: AsyncIterable<Buffer>,
): Promise<void> {
  let gathered: Buffer[] = [];
  let length = 0;
  let number = 0;
  const keep = async (): Promise<void> => {
    number += 1;
    const chunk = { ...key, number, bytes: Buffer.concat(gathered) };
    await withTenant(db, key.organisationId, (tx) => tx.insert(uploadChunk).values(chunk));
    gathered = [];
    length = 0;
  };
  for await (const block of packed) {
    gathered.push(block);
    length += block.length;
    if (length >= chunkBytes) await keep();
  }
  if (length > 0) await keep();
}
