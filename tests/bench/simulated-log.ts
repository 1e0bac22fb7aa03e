import { createWriteStream } from 'node:fs';
import { once } from 'node:events';

export const areas = Array.from({ length: 20 }, (_, index) => `Area ${index + 1}`);
const areasPerJob = 8;
const hourMs = 3_600_000;

/** Repeatable pseudo-random numbers in [0, 1): a linear congruential generator with known constants. */
function random(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (Math.imul(state, 1_664_525) + 1_013_904_223) >>> 0;
    return state / 2 ** 32;
  };
}

export interface LogOptions {
  file: string;
  rows: number;
  /** Begins the job keys, so that logs tell of different jobs. */
  prefix: string;
  seed: number;
  from: Date;
  days: number;
}

/** Writes an export in the usual dialect: commas, every cell quoted, rows in order of entry of the jobs. */
export async function writeSimulatedLog(options: LogOptions): Promise<void> {
  const { file, rows, prefix, seed, from, days } = options;
  const next = random(seed);
  const out = createWriteStream(file);
  out.write('"job","area","start","finish"\r\n');
  const jobs = Math.ceil(rows / areasPerJob);
  let written = 0;
  for (let job = 0; job < jobs; job++) {
    let at = from.getTime() + (job / jobs) * days * 24 * hourMs;
    const first = Math.floor(next() * areas.length);
    const lines = [];
    for (let place = 0; place < areasPerJob && written < rows; place++, written++) {
      const started = Math.floor(at + next() * 8 * hourMs);
      const finished = Math.floor(started + (0.2 + next() * 6) * hourMs);
      at = finished;
      const area = areas[(first + place) % areas.length] ?? '';
      lines.push(
        `"${prefix}${String(job).padStart(8, '0')}","${area}","${stamp(started)}","${stamp(finished)}"\r\n`,
      );
    }
    if (!out.write(lines.join(''))) await once(out, 'drain');
  }
  out.end();
  await once(out, 'finish');
}

const stamp = (at: number) => new Date(at).toISOString();
