import { sql } from 'drizzle-orm';
import { Client } from 'pg';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { connect, type Database } from '../../server/db/client.ts';
import { Analyst } from '../support/analyst.ts';
import { cloneDatabase, type ClonedDatabase } from '../support/database.ts';
import { endServers, startServerOn, type ServerProcess } from '../support/server-process.ts';
import { derivedAndRebuilt, nothingLeft, readLeftOvers } from '../support/wholeness.ts';

/** A server with its queue, over a database in which the test can hold things up. */
let database: ClonedDatabase;
let db: Database;
let server: ServerProcess;
let analyst: Analyst;

beforeAll(async () => {
  database = await cloneDatabase();
  db = connect(database.migratingUrl, { max: 2 });
  server = await startServerOn(database.migratingUrl);
  analyst = await Analyst.at(server.origin);
}, 120_000);
afterAll(async () => {
  await endServers();
  await db.$client.end();
  await database.drop();
}, 120_000);

const row = (finish: string) => `J1,Bench,2026-10-24T01:00Z,${finish}\n`;
const file = (finish: string) => new Blob([`job,area,start,finish\n${row(finish)}`]);
const stamp = (at: number) => new Date(at).toISOString();
const many = new Blob([
  'job,area,start,finish\n',
  ...Array.from({ length: 20_000 }, (_, index) => {
    const start = Date.UTC(2026, 0, 1) + index * 600_000;
    return `L${index % 4000},Bench,${stamp(start)},${stamp(start + 3_600_000)}\n`;
  }),
]);

const statusOf = async (site: number, upload: number) =>
  (await analyst.call<Upload>(`/api/sites/${site}/uploads/${upload}`)).status;

/** Holds up the load of one site: its zones are locked, and a load writes them last. */
async function holdUp(site: number): Promise<() => Promise<void>> {
  const client = new Client({ connectionString: database.migratingUrl });
  await client.connect();
  await client.query('begin');
  await client.query('select from zone where site_id = $1 for update', [site]);
  return () => client.end();
}

describe('uploads', () => {
  it('to one site are taken in one after the other, in order of receipt', async () => {
    const site = await analyst.makeSite('In order');
    const letGo = await holdUp(site);
    const first = await analyst.send(site, file('2026-10-24T02:00Z'));
    const second = await analyst.send(site, file('2026-10-24T03:00Z'));
    await analyst.until(site, first, ['loading']);
    expect(await statusOf(site, second)).toBe('waiting');
    await letGo();
    const loaded = await analyst.until(site, second, ['loaded', 'failed']);
    // The first was loaded before: the second's word on the same row is later.
    expect(loaded).toMatchObject({ status: 'loaded', account: { new: 0, correcting: 1 } });
    expect(await statusOf(site, first)).toBe('loaded');
  }, 120_000);

  it('to another site do not wait for them', async () => {
    const [held, free] = [await analyst.makeSite('Held'), await analyst.makeSite('Free')];
    const letGo = await holdUp(held);
    const slow = await analyst.send(held, file('2026-10-24T02:00Z'));
    await analyst.until(held, slow, ['loading']);
    const quick = await analyst.send(free, file('2026-10-24T02:00Z'));
    expect(await analyst.until(free, quick, ['loaded', 'failed'])).toMatchObject({
      status: 'loaded',
    });
    expect(await statusOf(held, slow)).toBe('loading');
    await letGo();
    expect(await analyst.until(held, slow, ['loaded', 'failed'])).toMatchObject({
      status: 'loaded',
    });
  }, 120_000);
});

describe('a load whose connection is lost', () => {
  it('is taken up again by itself, and ends loaded', async () => {
    const site = await analyst.makeSite('Lost');
    const letGo = await holdUp(site);
    const id = await analyst.send(site, many);
    await analyst.until(site, id, ['loading']);
    const lost = await db.execute(sql`/* lose the load's connection */
      select pg_terminate_backend(pid) from pg_locks
      where locktype = 'advisory' and granted and objid = ${site} and objsubid = 2
        and database = (select oid from pg_database where datname = current_database())`);
    expect(lost.rowCount).toBe(1);
    await letGo();
    const loaded = await analyst.until(site, id, ['loaded', 'failed']);
    expect(loaded).toMatchObject({ status: 'loaded', account: { rowsRead: 20_000, new: 20_000 } });
    await expect.poll(() => readLeftOvers(db), { timeout: 60_000 }).toEqual(nothingLeft);
    const { derived, rebuilt } = await derivedAndRebuilt(db, site);
    expect(derived).toEqual(rebuilt);
  }, 120_000);
});
