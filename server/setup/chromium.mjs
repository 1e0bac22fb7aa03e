import { existsSync } from 'node:fs';
import { installDebianPackages } from './debian-packages.mjs';

const places = ['/usr/bin/chromium', '/usr/bin/chromium-browser', '/usr/bin/google-chrome'];

/** The browser for the tests; null where there is none. */
export function findChromium() {
  return places.find((place) => existsSync(place)) ?? null;
}

/** Finds Chromium, or installs Debian's package of it. @throws SetupError */
export function ensureChromium() {
  if (findChromium() === null) installDebianPackages(['chromium'], 'Chromium');
}
