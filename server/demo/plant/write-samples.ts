import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { plantExports } from './exports.ts';

/** `npm run samples`: writes the exports of the invented plant afresh; the same bytes every time. */
for (const { fileName, text } of plantExports()) {
  const file = fileURLToPath(new URL(`../../../samples/${fileName}`, import.meta.url));
  writeFileSync(file, text);
  process.stdout.write(`${fileName}: ${text.split('\n').length - 2} rows\n`);
}
