import { SetupError } from './say.mjs';

const oldest = 20;

/** @throws SetupError where this Node is too old to run the product */
export function checkNodeVersion() {
  if (Number(process.versions.node.split('.')[0]) < oldest)
    throw new SetupError(
      `Weirmark needs Node ${oldest} or newer, and this is ${process.versions.node}: install it from https://nodejs.org.`,
    );
}
