import { createHash } from 'node:crypto';
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import path from 'node:path';

/** A hash over files and folders: names, sizes and contents. */
export function hashOf(...places) {
  const hash = createHash('sha256');
  for (const place of places) addTo(hash, place);
  return hash.digest('hex');
}

function addTo(hash, place) {
  hash.update(place);
  if (!existsSync(place)) return;
  if (statSync(place).isDirectory())
    for (const name of readdirSync(place).sort()) addTo(hash, path.join(place, name));
  else hash.update(readFileSync(place));
}

export const stampMatches = (file, value) =>
  existsSync(file) && readFileSync(file, 'utf8') === value;

export const writeStamp = (file, value) => writeFileSync(file, value);
