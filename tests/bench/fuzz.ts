import { fuzzedFile } from '../support/fuzzed-files.ts';
import { judgeFile } from '../support/judged-file.ts';

const say = (line: string) => process.stdout.write(`${line}\n`);

/**
 * Reads many exports to which something happened, as intake does but without a database: each is read to its
 * last line with counts that add up, or refused with a sentence.
 *
 * @returns whether all were
 */
export async function fuzz(files: number, seed: number): Promise<boolean> {
  const counts = { read: 0, refused: 0, rows: 0, refusedRows: 0, bad: 0 };
  for (let index = 0; index < files; index++) {
    const { story, shape, bytes } = await fuzzedFile(seed, index);
    const { outcome, rows, refused, problems } = await judgeFile(bytes, shape);
    counts[outcome] += 1;
    counts.rows += rows;
    counts.refusedRows += refused;
    if (problems.length === 0) continue;
    counts.bad += 1;
    say(`${story}: ${problems.join('; ')}`);
  }
  say(
    `Of ${files} files ${counts.read} were read (${counts.rows} rows, ${counts.refusedRows} of them refused) and ${counts.refused} refused with a sentence; ${counts.bad} were not in order.`,
  );
  return counts.bad === 0;
}
