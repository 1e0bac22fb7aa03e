import { createHash } from 'node:crypto';
import { chmodSync, existsSync, mkdirSync, mkdtempSync, readdirSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { clusterUser, mayWrite, probePrefix, type ClusterUser } from './cluster-user.ts';

export type ClusterKind = 'start' | 'dev' | 'test';

const testFolderPrefix = path.join(os.tmpdir(), 'weirmark-test-');
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
    const folder = mkdtempSync(testFolderPrefix);
    return { folder: prepared(folder, user), user };
  }
  for (const place of given === undefined ? usualPlaces(kind) : [path.resolve(given)]) {
    try {
      mkdirSync(place, { recursive: true });
      if (!isOurs(place)) continue;
      prepared(place, user);
    } catch {
      continue;
    }
    if (mayWrite(user, place)) return { folder: place, user };
  }
  throw new Error(
    given === undefined
      ? 'There is no folder for the local database. Set WEIRMARK_DATA_DIR to one that can be written to.'
      : `The local database cannot be kept in ${given}: it holds something else, or the user that runs PostgreSQL cannot write to it. Set WEIRMARK_DATA_DIR to another folder.`,
  );
}

/** Folders of test clusters of this user that have been used: of runs that go on, and of killed ones. */
export function usedTestFolders(user: ClusterUser): string[] {
  return readdirSync(path.dirname(testFolderPrefix))
    .map((name) => path.join(path.dirname(testFolderPrefix), name))
    .filter((folder) => folder.startsWith(testFolderPrefix) && mayWrite(user, folder))
    .filter((folder) => existsSync(path.join(folder, 'users')));
}

function usualPlaces(kind: ClusterKind): string[] {
  const name = createHash('sha256').update(checkout).digest('hex').slice(0, 16);
  return [
    path.join(checkout, '.data', `postgresql-${kind}`),
    path.join('/var/lib/weirmark', name, kind),
    path.join(os.tmpdir(), `weirmark-${name}`, kind),
  ];
}

/** A folder is taken where it is new or holds a cluster of ours: no one else's is closed to them. */
function isOurs(folder: string): boolean {
  // Another process may be about to make one.
  const names = readdirSync(folder).filter((name) => !name.startsWith(probePrefix));
  return names.includes('password') || names.every((name) => name === 'lock');
}

function prepared(folder: string, user: ClusterUser): string {
  chmodSync(folder, 0o700);
  user.own(folder);
  return folder;
}
