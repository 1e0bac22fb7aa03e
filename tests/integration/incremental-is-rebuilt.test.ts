import { sql } from 'drizzle-orm';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { zoneRules } from '../../shared/local-time.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { rebuildSite } from '../../server/flow/derive/derive.ts';
import { readDerived } from '../../server/flow/derived-state.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { asCsv, cutLogArbitrary, steadyLog } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const lowmoor = 1;
const state = (site: TestSite) =>
  withTenant(test.db, lowmoor, (tx) => readDerived(tx, lowmoor, site.id));

async function rebuild(site: TestSite, timeZone: string) {
  await withTenant(test.db, lowmoor, (tx) =>
    rebuildSite({
      tx,
      organisationId: lowmoor,
      siteId: site.id,
      rules: zoneRules(timeZone),
      inferLostFinish: true,
      newPassAfterDays: 90,
      moves: [],
    }),
  );
}

/** Every figure by area and site names: ids of areas differ from site to site. */
async function figures(site: TestSite) {
  const zones = await site.zones();
  const query = { from: '2026-10-20T00:00:00Z', to: '2026-11-02T00:00:00Z', step: 'hour' };
  const found: Record<string, unknown> = {};
  for (const zone of zones) {
    const { points } = await site.get<{ points: unknown[] }>(`/zones/${zone.id}/series`, query);
    found[zone.kind === 'site' ? 'site' : zone.name] = { dataUntil: zone.dataUntil, points };
  }
  return found;
}

const timeZone = 'Europe/Dublin';
const start = Date.parse('2026-10-23T00:00:00Z');
const uploads = cutLogArbitrary(start);

describe('what is derived upload by upload', () => {
  it('is what a rebuild derives', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, async (parts) => {
        const site = await makeSite(test, { timeZone });
        for (const rows of parts) await site.upload(asCsv(rows));
        const before = await state(site);
        await rebuild(site, timeZone);
        expect(await state(site)).toEqual(before);
      }),
      { numRuns: 20, seed: 20_261_202 },
    );
  });

  it('is that too where few of many jobs change, and only their hours are made', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, async (parts) => {
        const site = await makeSite(test, { timeZone });
        await site.upload(asCsv(steadyLog(start, 80)));
        const ids = [];
        for (const rows of parts) ids.push((await site.upload(asCsv(rows))).id);
        const before = await state(site);
        await rebuild(site, timeZone);
        expect(await state(site)).toEqual(before);
        await site.withdraw(ids[0] ?? 0);
        const after = await state(site);
        await rebuild(site, timeZone);
        expect(await state(site)).toEqual(after);
      }),
      { numRuns: 12, seed: 20_261_204 },
    );
  });

  it('is, after a withdrawal, as if the upload had never come', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, fc.nat(), async (parts, chosen) => {
        const withdrawn = chosen % parts.length;
        const site = await makeSite(test, { timeZone });
        const ids = [];
        for (const rows of parts) ids.push((await site.upload(asCsv(rows))).id);
        await site.withdraw(ids[withdrawn] ?? 0);
        const other = await makeSite(test, { timeZone });
        for (const [index, rows] of parts.entries())
          if (index !== withdrawn) await other.upload(asCsv(rows));
        expect(await figures(site)).toEqual(await figures(other));
        const before = await state(site);
        await rebuild(site, timeZone);
        expect(await state(site)).toEqual(before);
      }),
      { numRuns: 12, seed: 20_261_203 },
    );
  });

  it('notices a level that was tampered with', async () => {
    const site = await makeSite(test, { timeZone });
    await site.upload('job,area,start,finish\nJ1,Bench,2026-10-24T01:00Z,2026-10-24T05:00Z\n');
    const before = await state(site);
    await withTenant(test.db, lowmoor, (tx) =>
      tx.execute(sql`update level_hour set ups = ups + 1 where site_id = ${site.id}`),
    );
    expect(await state(site)).not.toEqual(before);
    await rebuild(site, timeZone);
    expect(await state(site)).toEqual(before);
  });
});

describe('a second telling', () => {
  const header = 'job,area,arrived,started,finished\n';

  it('completes an open stay, corrects a changed time, and is the same otherwise', async () => {
    const site = await makeSite(test);
    await site.upload(
      `${header}J1,Bench,,2026-10-24T01:00Z,\nJ2,Bench,,2026-10-24T02:00Z,2026-10-24T03:00Z\nJ3,Bench,,2026-10-24T02:00Z,2026-10-24T03:00Z\n`,
    );
    const second = await site.upload(
      `${header}J1,Bench,,2026-10-24T01:00Z,2026-10-24T05:00Z\nJ2,Bench,,2026-10-24T02:00Z,2026-10-24T04:00Z\nJ3,Bench,,2026-10-24T02:00Z,\nJ4,Bench,,2026-10-24T02:00Z,\n`,
    );
    expect(second.account).toMatchObject({ new: 1, completing: 1, correcting: 1, same: 1 });
    const job = await site.get<{
      records: { finished: string; versions: { outcome: string }[] }[];
    }>('/jobs/J2');
    expect(job.records).toMatchObject([
      {
        finished: '2026-10-24T04:00:00.000Z',
        versions: [{ outcome: 'new' }, { outcome: 'correcting' }],
      },
    ]);
  });

  it('of a job that waited makes no second record when it has started', async () => {
    const site = await makeSite(test);
    await site.upload(`${header}J1,Bench,2026-10-24T01:00Z,,\n`);
    const second = await site.upload(
      `${header}J1,Bench,2026-10-24T01:00Z,2026-10-24T02:00Z,2026-10-24T03:00Z\n`,
    );
    expect(second.account).toMatchObject({ new: 0, completing: 1 });
    const job = await site.get<{ records: unknown[] }>('/jobs/J1');
    expect(job.records).toHaveLength(1);
  });

  it('within one file counts as the same', async () => {
    const site = await makeSite(test);
    const row = 'J1,Bench,,2026-10-24T01:00Z,2026-10-24T02:00Z\n';
    const upload = await site.upload(header + row + row + row);
    expect(upload.account).toMatchObject({ rowsRead: 3, new: 1, same: 2 });
  });

  it('of the same bytes is a new upload of which every row is the same', async () => {
    const site = await makeSite(test);
    const file = `${header}J1,Bench,,2026-10-24T01:00Z,\nJ2,Bench,,2026-10-24T02:00Z,\n`;
    const first = await site.upload(file);
    const second = await site.upload(file);
    expect(second.id).not.toBe(first.id);
    expect(second.account).toMatchObject({ rowsRead: 2, new: 0, same: 2 });
  });

  it('of a record id under another job moves the record there', async () => {
    const site = await makeSite(test, { timeZone });
    const columns = 'record id,job,area,started,finished\n';
    await site.upload(
      `${columns}R1,J1,Bench,2026-10-24T01:00Z,2026-10-24T02:00Z\nR2,J1,Oven,2026-10-24T03:00Z,\n`,
    );
    const second = await site.upload(`${columns}R2,J2,Oven,2026-10-24T03:00Z,2026-10-24T04:00Z\n`);
    expect(second.account).toMatchObject({ new: 0, correcting: 1 });
    const left = await site.get<{ records: unknown[] }>('/jobs/J1');
    expect(left.records).toMatchObject([{ areaName: 'Bench' }]);
    const moved = await site.get<{ records: unknown[] }>('/jobs/J2');
    expect(moved.records).toMatchObject([
      {
        areaName: 'Oven',
        finished: '2026-10-24T04:00:00.000Z',
        versions: [{ outcome: 'new' }, { outcome: 'correcting' }],
      },
    ]);
    const before = await state(site);
    await rebuild(site, timeZone);
    expect(await state(site)).toEqual(before);
  });
});
