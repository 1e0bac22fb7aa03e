import { readFileSync } from 'node:fs';

/** A file of the published examples beside this one, as text. */
export const referenceText = (name: string): string =>
  readFileSync(new URL(`./data/${name}`, import.meta.url), 'utf8');
