import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';
import { installDebianPackages } from './debian-packages.mjs';
import { run } from './run.mjs';

const home = '/usr/lib/postgresql';
const needed = ['initdb', 'pg_ctl', 'postgres'];
const has = (folder) => needed.every((name) => existsSync(path.join(folder, name)));

/** The folder of PostgreSQL's server programs, the newest version first; null where there is none. */
export function findPostgresBinaries() {
  const versions = existsSync(home) ? readdirSync(home) : [];
  for (const version of versions.sort((one, other) => Number(other) - Number(one)))
    if (has(path.join(home, version, 'bin'))) return path.join(home, version, 'bin');
  const told = run('pg_config', ['--bindir']);
  return told.ok && has(told.output.trim()) ? told.output.trim() : null;
}

/** Finds PostgreSQL, or installs Debian's package of it. @throws SetupError */
export function ensurePostgres() {
  if (findPostgresBinaries() === null) installDebianPackages(['postgresql'], 'PostgreSQL');
}
