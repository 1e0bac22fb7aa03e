import { mkdtempSync, chmodSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { sql } from 'drizzle-orm';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { Analyst } from '../support/analyst.ts';
import { FrozenLoad, type Moment } from '../support/frozen-load.ts';
import {
  databaseUrl,
  endServers,
  killDatabase,
  startServer,
  type ServerProcess,
} from '../support/server-process.ts';
import { derivedAndRebuilt, lookingAt, nothingLeft, readLeftOvers } from '../support/wholeness.ts';

/** Kills of the server and of its database while 30,000 rows are taken in, at moments that are held. */
let parent: string;
let folder: string;
let server: ServerProcess;

beforeAll(async () => {
  parent = mkdtempSync(path.join(os.tmpdir(), 'weirmark-kills-'));
  chmodSync(parent, 0o755);
  folder = path.join(parent, 'local');
  server = await startServer(folder);
}, 120_000);
afterAll(async () => {
  await endServers();
  rmSync(parent, { recursive: true, force: true });
}, 120_000);

const rows = 30_000;
/** 3 MB, so that its reading tells of progress on the way. */
function manyRows(): string {
  const lines = ['job,area,start,finish,resource'];
  for (let row = 0; row < rows; row++) {
    const start = Date.UTC(2026, 0, 1) + row * 600_000;
    const stamp = (at: number) => new Date(at).toISOString();
    lines.push(
      `LM-${row % 6000},Area ${row % 5},${stamp(start)},${stamp(start + 3_600_000)},Bench ${row} of the morning shift`,
    );
  }
  return lines.join('\n');
}
const file = Buffer.from(manyRows());

const kills = {
  server: async () => {
    await server.end('SIGKILL');
  },
  database: async () => {
    killDatabase(folder);
    // The server outlives it, says so, and ends in order.
    await expect
      .poll(async () => (await fetch(`${server.origin}/api/health`)).status, { timeout: 30_000 })
      .toBe(503);
    await server.end('SIGTERM');
  },
};
const victims = ['server', 'database'] as const;

/** Ends the load's own process of the database by force: all others are ended by it, and it recovers. */
async function crashDatabase(): Promise<void> {
  const pid = await lookingAt(databaseUrl(folder), async (db) => {
    const { rows } = await db.execute(sql`/* the load */
      select pid from pg_locks where locktype = 'advisory' and objsubid = 2 and granted`);
    return Number(rows[0]?.pid);
  });
  process.kill(pid, 'SIGKILL');
}

/** Waits until an upload is taken in, and proves that it is wholly, once, and with nothing beside it. */
async function isWhole(site: number, id: number): Promise<void> {
  const analyst = await Analyst.at(server.origin);
  expect(await analyst.until(site, id, ['loaded', 'failed'])).toMatchObject({
    status: 'loaded',
    account: { rowsRead: rows, new: rows, refused: 0 },
  });
  await restsAtLast();
  const { derived, rebuilt } = await lookingAt(databaseUrl(folder), (db) =>
    derivedAndRebuilt(db, site),
  );
  expect(derived).toEqual(rebuilt);
  expect(derived[0]).toMatchObject({ table: 'record', rows });
}

const leftOvers = () => lookingAt(databaseUrl(folder), readLeftOvers);
const restsAtLast = () => expect.poll(leftOvers, { timeout: 60_000 }).toEqual(nothingLeft);

describe.each(victims)('the %s, killed', (victim) => {
  const moments: Moment[] = ['reading', 'deriving'];
  it.each(moments)(
    'while it is %s an upload, leaves it to the next start, which takes it in whole',
    async (moment) => {
      const analyst = await Analyst.at(server.origin);
      const site = await analyst.makeSite(`${victim} ${moment}`);
      const frozen = new FrozenLoad(databaseUrl(folder));
      await frozen.holdAt(moment);
      const id = await analyst.send(site, new Blob([file]));
      await frozen.arrived(id);
      await kills[victim]();
      await frozen.letGo();

      server = await startServer(folder);
      await isWhole(site, id);
    },
    120_000,
  );

  it('as soon as an upload is accepted, leaves it to the next start too', async () => {
    const analyst = await Analyst.at(server.origin);
    const site = await analyst.makeSite(`${victim} accepted`);
    const id = await analyst.send(site, new Blob([file]));
    await kills[victim]();
    server = await startServer(folder);
    await isWhole(site, id);
  }, 120_000);

  it('while a file arrives, leaves nothing of it', async () => {
    const analyst = await Analyst.at(server.origin);
    const site = await analyst.makeSite(`${victim} arriving`);
    const breakOff = analyst.sendInPart(site, file);
    await expect.poll(async () => (await leftOvers()).under_way, { timeout: 30_000 }).toBe(1);
    await kills[victim]();
    breakOff();
    server = await startServer(folder);
    await restsAtLast();
    const next = await Analyst.at(server.origin);
    expect(await next.call(`/api/sites/${site}/uploads`)).toEqual([]);
  }, 120_000);
});

describe('a database that crashes and comes back by itself', () => {
  it('leaves the server running, which takes the upload in whole, unasked', async () => {
    const analyst = await Analyst.at(server.origin);
    const site = await analyst.makeSite('crash');
    const frozen = new FrozenLoad(databaseUrl(folder));
    await frozen.holdAt('deriving');
    const id = await analyst.send(site, new Blob([file]));
    await frozen.arrived(id);
    await crashDatabase();
    await frozen.letGo();
    const status = async () =>
      (await analyst.call<Upload>(`/api/sites/${site}/uploads/${id}`)).status;
    // Calls fail while it recovers.
    await expect.poll(() => status().catch(String), { timeout: 60_000 }).toBe('loaded');
    await isWhole(site, id);
  }, 120_000);
});
