import { existsSync, mkdirSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { setTimeout as wait } from 'node:timers/promises';
import { isLiving, processIdentity } from './living-process.ts';

const usersOf = (folder: string) => path.join(folder, 'users');
const ownIdentity = () => processIdentity(process.pid) ?? String(process.pid);

/** Notes this process as one that uses the cluster. */
export function enterCluster(folder: string): void {
  mkdirSync(usersOf(folder), { recursive: true });
  writeFileSync(path.join(usersOf(folder), String(process.pid)), ownIdentity());
}

/** Takes this process off the list. */
export function leaveCluster(folder: string): void {
  rmSync(path.join(usersOf(folder), String(process.pid)), { force: true });
}

/** Whether a living process uses the cluster; a killed one left its note behind, and is forgotten. */
export function isClusterInUse(folder: string): boolean {
  if (!existsSync(usersOf(folder))) return false;
  let inUse = false;
  for (const name of readdirSync(usersOf(folder))) {
    const file = path.join(usersOf(folder), name);
    if (isLiving(readFileSync(file, 'utf8'))) inUse = true;
    else rmSync(file, { force: true });
  }
  return inUse;
}

/** One process at a time makes, starts or stops the cluster; the lock of a killed one does not count. */
export async function withClusterLock<Result>(
  folder: string,
  work: () => Result | Promise<Result>,
): Promise<Result> {
  const lock = path.join(folder, 'lock');
  while (!takeLock(lock)) await wait(50);
  try {
    return await work();
  } finally {
    rmSync(lock, { force: true });
  }
}

function takeLock(lock: string): boolean {
  try {
    writeFileSync(lock, ownIdentity(), { flag: 'wx' });
    return true;
  } catch (error) {
    if (!(error instanceof Error && 'code' in error && error.code === 'EEXIST')) throw error;
    if (!isHeld(lock)) rmSync(lock, { force: true });
    return false;
  }
}

function isHeld(lock: string): boolean {
  try {
    const holder = readFileSync(lock, 'utf8');
    // Empty for the moment between its making and its writing.
    return holder === '' || isLiving(holder);
  } catch {
    return false;
  }
}
