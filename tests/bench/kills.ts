import { openAsBlob } from 'node:fs';
import path from 'node:path';
import { sql } from 'drizzle-orm';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { Analyst } from '../support/analyst.ts';
import {
  databaseUrl,
  killDatabase,
  startServer,
  type ServerProcess,
} from '../support/server-process.ts';
import { derivedAndRebuilt, lookingAt, readLeftOvers } from '../support/wholeness.ts';
import { secondsOf } from './measure.ts';
import { writeSimulatedLog } from './simulated-log.ts';

const rows = 300_000;
/** Begun to arrive; begun to be read; then shares of the time that an undisturbed upload takes. */
const moments = ['receiving', 'reading', 'reading', 0.2, 0.3, 0.4, 0.5, 0.65, 0.8, 0.95] as const;
type Moment = (typeof moments)[number];
const patienceMs = 60_000;
const say = (line: string) => process.stdout.write(`${line}\n`);
const pause = (ms: number) => new Promise((resolve) => setTimeout(resolve, ms));

/**
 * Kills the server and its database, in turns, at ten moments of an upload of 300,000 rows, from its first bytes
 * to the last figure. Started again, the upload is there wholly or not at all, the site is as a
 * rebuild makes it, and nothing is left over.
 *
 * @param folder for the log and a local database
 * @returns whether that held each time
 */
export async function kill(folder: string): Promise<boolean> {
  const file = path.join(folder, 'log.csv');
  const span = { from: new Date('2025-01-01T00:00:00Z'), days: 360 };
  await writeSimulatedLog({ file, rows, prefix: 'K', seed: 7, ...span });
  const bench = new KillBench(path.join(folder, 'local'), await openAsBlob(file));
  await bench.start();
  try {
    const seconds = await secondsOf(() => bench.undisturbed());
    say(`Undisturbed, ${rows.toLocaleString('en')} rows take ${seconds.toFixed(1)} s.`);
    let good = 0;
    for (const [index, moment] of moments.entries())
      if (await bench.killAt(index, moment, seconds * 1000)) good += 1;
    say(`${good} of ${moments.length} ended wholly loaded or not at all, and as a rebuild has it.`);
    return good === moments.length;
  } finally {
    await bench.stop();
  }
}

class KillBench {
  readonly #folder: string;
  readonly #file: Blob;
  #server: ServerProcess | null = null;

  constructor(folder: string, file: Blob) {
    this.#folder = folder;
    this.#file = file;
  }

  async start(): Promise<Analyst> {
    this.#server ??= await startServer(this.#folder);
    return Analyst.at(this.#server.origin);
  }

  async stop(): Promise<void> {
    await this.#server?.end('SIGTERM');
    this.#server = null;
  }

  async undisturbed(): Promise<void> {
    const analyst = await this.start();
    const site = await analyst.makeSite('Undisturbed');
    await analyst.until(site, await analyst.send(site, this.#file), ['loaded', 'failed']);
  }

  /** @returns whether the upload ended as it should */
  async killAt(index: number, moment: Moment, wholeMs: number): Promise<boolean> {
    const ofServer = index % 2 === 0;
    const analyst = await this.start();
    const site = await analyst.makeSite(`Kill ${index + 1}`);
    let id: number | null = null;
    const sending = analyst.send(site, this.#file).then(
      (sent) => (id = sent),
      () => null,
    );
    const seen = await this.#reached(moment, wholeMs, site);
    const path = `/api/sites/${site}/uploads`;
    if (ofServer) await this.#server?.end('SIGKILL');
    else {
      killDatabase(this.#folder);
      await this.stop();
    }
    this.#server = null;
    await sending;

    const next = await this.start();
    const listed = await next.call<Upload[]>(path);
    for (const upload of listed) await next.until(site, upload.id, ['loaded', 'failed']);
    const [ended] = await next.call<Upload[]>(path);
    const isWhole = ended?.status === 'loaded' && ended.account.new === rows;
    const isNothing = id === null && ended === undefined;
    const isRight = (isWhole || isNothing) && (await this.#isAtRest(site));
    say(
      `${ofServer ? 'Server' : 'Database'} killed while ${seen}: ${isWhole ? 'wholly loaded' : isNothing ? 'not at all' : `NOT WHOLE, ${JSON.stringify(ended)}`}${isRight ? '' : ', NOT AT REST'}`,
    );
    return isRight;
  }

  /** Waits for the moment. @returns the upload's status then */
  #reached(moment: Moment, wholeMs: number, site: number): Promise<string> {
    return lookingAt(databaseUrl(this.#folder), async (db) => {
      const status = async () => {
        const { rows: found } = await db.execute(sql`/* status */
          select status from upload where site_id = ${site}`);
        return (found[0]?.status as string | undefined) ?? 'not begun';
      };
      if (typeof moment === 'number') await pause(moment * wholeMs);
      else while (!(await status()).includes(moment));
      return status();
    });
  }

  async #isAtRest(site: number): Promise<boolean> {
    return lookingAt(databaseUrl(this.#folder), async (db) => {
      const until = Date.now() + patienceMs;
      const rests = async () => Object.values(await readLeftOvers(db)).every((left) => left === 0);
      while (!(await rests())) {
        if (Date.now() > until) return false;
        await pause(200);
      }
      const { derived, rebuilt } = await derivedAndRebuilt(db, site);
      return JSON.stringify(derived) === JSON.stringify(rebuilt);
    });
  }
}
