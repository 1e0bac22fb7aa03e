import { SetupError } from './say.mjs';

/** Its checksums of zip archives came with this version. */
const oldest = '20.15';

/** @throws SetupError where this Node is too old to run the product */
export function checkNodeVersion() {
  const [major, minor] = process.versions.node.split('.').map(Number);
  const [oldestMajor, oldestMinor] = oldest.split('.').map(Number);
  if (major < oldestMajor || (major === oldestMajor && minor < oldestMinor))
    throw new SetupError(
      `Weirmark needs Node ${oldest} or newer, and this is ${process.versions.node}: install it from https://nodejs.org.`,
    );
}
