import { hashOf, stampMatches, writeStamp } from './stamp.mjs';
import { run } from './run.mjs';
import { say, SetupError } from './say.mjs';

const stampFile = 'node_modules/.setup-stamp';

/**
 * Installs the packages of the lock file, unless they are there already. The stamp is written last, so an
 * installation that was broken off is done again. @throws SetupError
 */
export function ensureNodePackages() {
  const wanted = `${process.version} ${hashOf('package-lock.json')}`;
  if (stampMatches(stampFile, wanted)) return;
  say('Installing packages …');
  const npm = process.env.npm_execpath;
  const args = ['ci', '--include=dev', '--no-audit', '--no-fund'];
  const installed = npm ? run(process.execPath, [npm, ...args]) : run('npm', args);
  if (!installed.ok)
    throw new SetupError(
      `The packages could not be installed: ${installed.output.trim().split('\n').slice(-5).join(' ')} Check the connection to the npm registry and try again.`,
    );
  writeStamp(stampFile, wanted);
}
