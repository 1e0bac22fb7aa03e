import { createHash, randomBytes } from 'node:crypto';

/** A new access key for a machine, and the hash that is kept of it: 256 random bits need no slow hash. */
export function newAccessKey(): { key: string; keyHash: string } {
  const key = `wmk_${randomBytes(32).toString('base64url')}`;
  return { key, keyHash: hashAccessKey(key) };
}

export const hashAccessKey = (key: string): string =>
  createHash('sha256').update(key).digest('base64url');
