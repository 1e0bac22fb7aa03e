import { spawnSync } from 'node:child_process';
import { chownSync, readFileSync } from 'node:fs';

/** Under whom PostgreSQL runs: it refuses to run as root, so root hands it to the user postgres. */
export interface ClusterUser {
  uid?: number;
  gid?: number;
  /** Gives a file or folder to that user. */
  own(place: string): void;
}

/** @throws Error where we are root and Debian's user is missing */
export function clusterUser(): ClusterUser {
  if (process.getuid?.() !== 0) return { own: () => undefined };
  const line = readFileSync('/etc/passwd', 'utf8')
    .split('\n')
    .find((each) => each.startsWith('postgres:'));
  const [, , uid, gid] = line?.split(':') ?? [];
  if (uid === undefined || gid === undefined)
    throw new Error(
      'As root, PostgreSQL is run by the user postgres, which is missing. Run: apt-get install postgresql',
    );
  const ids = { uid: Number(uid), gid: Number(gid) };
  return {
    ...ids,
    own: (place) => {
      chownSync(place, ids.uid, ids.gid);
    },
  };
}

/** Begins the name of what `mayWrite` makes and removes. */
export const probePrefix = '.probe-';

/** Whether that user may write below a folder: parents may be closed to it. */
export function mayWrite(user: ClusterUser, folder: string): boolean {
  const probe = `${folder}/${probePrefix}${process.pid}`;
  const touched = spawnSync('/bin/sh', ['-c', 'touch "$0" && rm "$0"', probe], {
    ...idsOf(user),
    cwd: '/',
    stdio: 'ignore',
  });
  return touched.status === 0;
}

/**
 * Runs one of PostgreSQL's programs to its end. Nothing is piped: a started server would hold the pipe.
 *
 * @throws Error where it does not end well
 */
export function runAsCluster(user: ClusterUser, program: string, args: readonly string[]): void {
  const ended = spawnSync(program, args, {
    ...idsOf(user),
    cwd: '/',
    stdio: 'ignore',
    env: { ...process.env, LC_ALL: 'C.UTF-8', TZ: 'UTC' },
  });
  if (ended.status === 0) return;
  throw new Error(`${program} ${args[0] ?? ''} failed with status ${ended.status ?? 'none'}.`, {
    cause: ended.error,
  });
}

/**
 * Ids of the processes that work in a folder, as those of a PostgreSQL do in its data directory. Asked as
 * that user: in a container even root may not look into another's processes.
 */
export function processesWorkingIn(user: ClusterUser, folder: string): number[] {
  const links = spawnSync(
    'find',
    ['/proc', '-mindepth', '2', '-maxdepth', '2', '-name', 'cwd', '-printf', '%p %l\\n'],
    { ...idsOf(user), cwd: '/', encoding: 'utf8', stdio: ['ignore', 'pipe', 'ignore'] },
  );
  if (links.error) throw new Error('The program find is missing.', { cause: links.error });
  return links.stdout
    .split('\n')
    .filter((line) => line.endsWith(` ${folder}`))
    .map((line) => Number(line.split('/')[2]));
}

const idsOf = ({ uid, gid }: ClusterUser) =>
  uid === undefined || gid === undefined ? {} : { uid, gid };
