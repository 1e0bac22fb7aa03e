import { fileURLToPath } from 'node:url';
import { ensureChromium } from './chromium.mjs';
import { ensureClientBuild } from './client-build.mjs';
import { ensureNodePackages } from './node-packages.mjs';
import { checkNodeVersion } from './node-version.mjs';
import { ensurePostgres } from './postgres-binaries.mjs';
import { SetupError } from './say.mjs';

/** What each command needs before it can run, in order. */
const steps = {
  start: [checkNodeVersion, ensureNodePackages, ensurePostgresUnlessGiven, ensureClientBuild],
  dev: [checkNodeVersion, ensureNodePackages, ensurePostgresUnlessGiven],
  test: [checkNodeVersion, ensureNodePackages, ensurePostgres, ensureChromium, ensureClientBuild],
  check: [checkNodeVersion, ensureNodePackages, ensurePostgres, ensureChromium],
};

function ensurePostgresUnlessGiven() {
  if (!process.env.DATABASE_URL) ensurePostgres();
}

process.chdir(fileURLToPath(new URL('../..', import.meta.url)));
try {
  for (const step of steps[process.argv[2]] ?? steps.start) step();
} catch (error) {
  if (!(error instanceof SetupError)) throw error;
  process.stderr.write(`${error.message}\n`);
  process.exitCode = 1;
}
