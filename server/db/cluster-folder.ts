import { createHash } from 'node:crypto';
import { chmodSync, mkdirSync, mkdtempSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { clusterUser, mayWrite, type ClusterUser } from './cluster-user.ts';

export type ClusterKind = 'start' | 'dev' | 'test';

const checkout = fileURLToPath(new URL('../..', import.meta.url));

/**
 * Where a cluster lies: in the given folder; else in the checkout, unless the user that runs PostgreSQL
 * cannot reach it (a home folder closed to others); else below /var/lib, by the checkout's path; else in
 * the temporary folder. A test's is always temporary.
 *
 * @throws Error where no place can be written to
 */
export function clusterFolder(
  kind: ClusterKind,
  given: string | undefined,
): { folder: string; user: ClusterUser } {
  const user = clusterUser();
  if (kind === 'test') {
    const folder = mkdtempSync(path.join(os.tmpdir(), 'weirmark-test-'));
    return { folder: prepared(folder, user), user };
  }
  for (const place of given === undefined ? usualPlaces(kind) : [path.resolve(given)]) {
    try {
      mkdirSync(place, { recursive: true });
      prepared(place, user);
    } catch {
      continue;
    }
    if (mayWrite(user, place)) return { folder: place, user };
  }
  throw new Error(
    given === undefined
      ? 'There is no folder for the local database. Set WEIRMARK_DATA_DIR to one that can be written to.'
      : `The local database cannot be kept in ${given}: it cannot be written to by the user that runs PostgreSQL. Set WEIRMARK_DATA_DIR to another folder.`,
  );
}

function usualPlaces(kind: ClusterKind): string[] {
  const name = createHash('sha256').update(checkout).digest('hex').slice(0, 16);
  return [
    path.join(checkout, '.data', `postgresql-${kind}`),
    path.join('/var/lib/weirmark', name, kind),
    path.join(os.tmpdir(), `weirmark-${name}`, kind),
  ];
}

function prepared(folder: string, user: ClusterUser): string {
  chmodSync(folder, 0o700);
  user.own(folder);
  return folder;
}
