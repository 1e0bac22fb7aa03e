import { randomBytes } from 'node:crypto';
import { rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { databaseName, type Cluster } from './cluster.ts';
import { runAsCluster } from './cluster-user.ts';

/**
 * Makes a cluster with a password of its own. The data directory gets its name when it is whole, so one
 * whose making was broken off is made anew.
 *
 * @throws Error where initdb fails
 */
export function makeCluster({ folder, data, user, bin, kind }: Cluster): void {
  const password = path.join(folder, 'password');
  const fresh = path.join(folder, 'data-in-the-making');
  rmSync(fresh, { recursive: true, force: true });
  writeFileSync(password, randomBytes(18).toString('base64url'), { mode: 0o600 });
  user.own(password);
  runAsCluster(user, path.join(bin, 'initdb'), [
    `--pgdata=${fresh}`,
    `--username=${databaseName}`,
    `--pwfile=${password}`,
    '--auth=scram-sha-256',
    '--encoding=UTF8',
    '--locale=C.UTF-8',
    ...(kind === 'test' ? ['--no-sync'] : []),
  ]);
  runAsCluster(user, '/bin/mv', [fresh, data]);
}
