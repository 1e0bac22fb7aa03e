import { spawnSync } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { clusterUser } from '../../server/db/cluster-user.ts';
import type { Database } from '../../server/db/client.ts';

/** A disk that has no room for a table of the database. */
export interface FullDisk {
  /** Makes room again. */
  free(): Promise<void>;
}

type Table = 'upload_chunk' | 'upload_row';

/** Ways to have a table meet a full disk. */
export const ways: Readonly<
  Record<string, (migrating: Database, table: Table) => Promise<FullDisk>>
> = {
  'as the database reports it': reportFull,
  // Only root may mount, and not in every container.
  ...(mayMount() ? { 'as a small disk that fills': moveToSmallDisk } : {}),
};

/** A trigger that fails with the SQLSTATE of a full disk, for where nothing can be mounted. */
async function reportFull(migrating: Database, table: Table): Promise<FullDisk> {
  const pool = migrating.$client;
  await pool.query(`
    create function report_full() returns trigger language plpgsql as $$
    begin
      raise exception 'could not extend file: No space left on device' using errcode = '53100';
    end
    $$`);
  await pool.query(`create trigger full_disk before insert on ${table}
    for each statement execute function report_full()`);
  return {
    async free() {
      await pool.query('drop function report_full() cascade');
    },
  };
}

/** Enough for what a table holds after a few small files, and not for a large one. */
const roomBytes = 393_216;

/** Lays the table on a small disk in memory. */
async function moveToSmallDisk(migrating: Database, table: Table): Promise<FullDisk> {
  const folder = mkdtempSync(path.join(os.tmpdir(), 'weirmark-disk-'));
  mount(roomBytes, folder);
  clusterUser().own(folder);
  const pool = migrating.$client;
  await pool.query(`create tablespace small_disk location '${folder}'`);
  await pool.query(`alter table ${table} set tablespace small_disk`);
  return {
    async free() {
      await pool.query(`alter table ${table} set tablespace pg_default`);
      await pool.query('drop tablespace small_disk');
      unmount(folder);
    },
  };
}

function mayMount(): boolean {
  if (process.getuid?.() !== 0) return false;
  const folder = mkdtempSync(path.join(os.tmpdir(), 'weirmark-disk-'));
  const isMounted = mount(4096, folder);
  unmount(folder);
  return isMounted;
}

/** Lazily: the database may still hold a file open that it has removed. */
function unmount(folder: string): void {
  run('umount', '--lazy', folder);
  rmSync(folder, { recursive: true, force: true });
}

function mount(bytes: number, folder: string): boolean {
  return run('mount', '-t', 'tmpfs', '-o', `size=${bytes}`, 'weirmark', folder);
}

function run(program: string, ...given: string[]): boolean {
  return spawnSync(program, given, { stdio: 'ignore' }).status === 0;
}
