import { createHash } from 'node:crypto';
import { Transform, type Readable } from 'node:stream';
import { pipeline } from 'node:stream/promises';
import { createGzip } from 'node:zlib';
import { and, eq } from 'drizzle-orm';
import type { Database } from '../db/client.ts';
import { upload, uploadChunk } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import type { UploadKey } from './original.ts';

/** For whom a file is received. */
export interface Receipt {
  organisationId: number;
  siteId: number;
  fileName: string;
  receivedAt: Date;
  /** The person, or the machine's key, that handed it over. */
  receivedBy: number | null;
  receivedKey: number | null;
}

export interface StoredOriginal {
  uploadId: number;
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
 * @throws what the stream or the database throws; nothing of the file is left then
 */
export async function storeOriginal(
  db: Database,
  receipt: Receipt,
  file: Readable,
): Promise<StoredOriginal> {
  const { organisationId, siteId, ...values } = receipt;
  const [row] = await withTenant(db, organisationId, (tx) =>
    tx
      .insert(upload)
      .values({ organisationId, siteId, status: 'receiving', ...values })
      .returning({ uploadId: upload.id }),
  );
  if (!row) throw new Error('The upload could not be kept.');
  const key = { organisationId, siteId, uploadId: row.uploadId };
  try {
    const hash = createHash('sha256');
    let byteSize = 0;
    const meter = new Transform({
      transform(block: Buffer, _encoding, done) {
        hash.update(block);
        byteSize += block.length;
        done(null, block);
      },
    });
    await pipeline(file, meter, createGzip({ level: gzipLevel }), (packed) =>
      keepChunks(db, key, packed as AsyncIterable<Buffer>),
    );
    return { uploadId: row.uploadId, byteSize, sha256: hash.digest('hex') };
  } catch (error) {
    await discardReceipt(db, key);
    throw error;
  }
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

/** Removes an upload that was not wholly received, with what there is of its file. */
export async function discardReceipt(db: Database, key: UploadKey): Promise<void> {
  await withTenant(db, key.organisationId, (tx) =>
    tx
      .delete(upload)
      .where(
        and(
          eq(upload.organisationId, key.organisationId),
          eq(upload.siteId, key.siteId),
          eq(upload.id, key.uploadId),
          eq(upload.status, 'receiving'),
        ),
      ),
  );
}
