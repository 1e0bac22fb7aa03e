import { hashOf, stampMatches, writeStamp } from './stamp.mjs';
import { run } from './run.mjs';
import { say, SetupError } from './say.mjs';

const stampFile = 'dist/.build-stamp';
const inputs = [
  'src',
  'shared',
  'index.html',
  'vite.config.ts',
  'tailwind.config.ts',
  'package-lock.json',
];

/** Builds the client when what it is made of has changed. @throws SetupError */
export function ensureClientBuild() {
  const wanted = hashOf(...inputs);
  if (stampMatches(stampFile, wanted)) return;
  say('Building the client …');
  const built = run(process.execPath, [
    'node_modules/vite/bin/vite.js',
    'build',
    '--logLevel',
    'warn',
  ]);
  if (!built.ok) throw new SetupError(`The client could not be built:\n${built.output}`);
  writeStamp(stampFile, wanted);
}
