import { existsSync, readdirSync } from 'node:fs';
import path from 'node:path';
import { installDebianPackages } from './debian-packages.mjs';
import { run } from './run.mjs';

const home = '/usr/lib/postgresql';
const needed = ['initdb', 'pg_ctl', 'postgres'];
const has = (folder) => needed.every((name) => existsSync(path.join(folder, name)));

/** The schema uses what came with this version. */
const oldest = 15;

/**
 * The folder of PostgreSQL's server programs, null where there is none.
 *
 * @param version its major version; the newest where it is left out
 */
export function findPostgresBinaries(version) {
  return (
    foldersByVersion().find((found) => !version || found.version === Number(version))?.bin ?? null
  );
}

/** Debian keeps versions side by side; elsewhere the one in use says where it is. Newest first. */
function foldersByVersion() {
  const names = existsSync(home) ? readdirSync(home) : [];
  const found = names.map((name) => ({ version: Number(name), bin: path.join(home, name, 'bin') }));
  const asked = run('pg_config', ['--version', '--bindir']);
  const told = /^PostgreSQL (\d+)[\s\S]*?^(\/.*)$/m.exec(asked.ok ? asked.output : '');
  if (told) found.push({ version: Number(told[1]), bin: told[2] });
  return found
    .filter(({ version, bin }) => version >= oldest && has(bin))
    .sort((one, other) => other.version - one.version);
}

/** Finds PostgreSQL, or installs Debian's package of it. @throws SetupError */
export function ensurePostgres() {
  if (findPostgresBinaries() === null) installDebianPackages(['postgresql'], 'PostgreSQL');
}
