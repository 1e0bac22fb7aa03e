import { createReadStream } from 'node:fs';
import { pipeline } from 'node:stream/promises';
import { sql } from 'drizzle-orm';
import { from as copyFrom } from 'pg-copy-streams';
import { zoneRules } from '../../shared/local-time.ts';
import type { Database } from '../../server/db/client.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { rebuildSite } from '../../server/flow/derive/derive.ts';
import { readInsideAt } from '../../server/flow/inside-at.ts';
import { readerOfSite } from '../../server/flow/figure-zones.ts';
import { median, secondsOf } from './measure.ts';

export const organisationId = 1;
const zoneRulesOfSites = zoneRules('Europe/Dublin');

/** The floor that imports are measured against: COPY of the same file into an unlogged table of texts. */
export async function rawCopySeconds(migrating: Database, file: string): Promise<number> {
  const client = await migrating.$client.connect();
  try {
    await client.query('drop table if exists raw_copy');
    await client.query(
      'create unlogged table raw_copy (job text, area text, start text, finish text)',
    );
    return await secondsOf(() =>
      pipeline(
        createReadStream(file, { highWaterMark: 1 << 20 }),
        client.query(copyFrom('copy raw_copy from stdin with (format csv, header)')),
      ),
    );
  } finally {
    await client.query('drop table if exists raw_copy');
    client.release();
  }
}

/** Daily means and peaks of all areas over a year, by window functions on the raw stays. */
export async function windowQuerySeconds(db: Database, siteId: number): Promise<number> {
  return secondsOf(() =>
    withTenant(db, organisationId, async (tx) => {
      await tx.execute(sql`select set_config('work_mem', '512MB', true)`);
      await tx.execute(sql`
        with change as (
          select zone_id, entered as at, 1 as step from zone_stay
          where organisation_id = ${organisationId} and site_id = ${siteId}
          union all
          select zone_id, left_at, -1 from zone_stay
          where organisation_id = ${organisationId} and site_id = ${siteId}
            and left_at is not null
        ),
        running as (
          select
            zone_id, at,
            sum(step) over (partition by zone_id order by at) as level,
            lead(at) over (partition by zone_id order by at) as until
          from change
        )
        select
          zone_id, date_trunc('day', at) as day, max(level),
          sum(level * extract(epoch from until - at)) / 86400
        from running group by 1, 2`);
    }),
  );
}

/** Seconds of a rebuild of the whole site. */
export async function rebuildSeconds(db: Database, siteId: number): Promise<number> {
  return secondsOf(() =>
    withTenant(db, organisationId, async (tx) => {
      await tx.execute(sql`select set_config('work_mem', '256MB', true)`);
      await rebuildSite({
        tx,
        organisationId,
        siteId,
        rules: zoneRulesOfSites,
        inferLostFinish: true,
        newPassAfterDays: 90,
        moves: [],
      });
    }),
  );
}

/** Median milliseconds of "who was inside, longest first", by our look-up and by a plain index on entry. */
export async function insideMilliseconds(
  migrating: Database,
  db: Database,
  siteId: number,
  zoneId: number,
  moments: readonly number[],
): Promise<{ ours: number; plain: number }> {
  await migrating.execute(sql`create index bench_plain on record
    (organisation_id, site_id, area_id, stay_from) include (left_at)`);
  await migrating.execute(sql`vacuum analyze record`);
  const [ours, plain] = await withTenant(db, organisationId, async (tx) => {
    const reader = await readerOfSite(tx, organisationId, siteId);
    const times: [number[], number[]] = [[], []];
    for (const at of moments) {
      times[0].push(await secondsOf(() => readInsideAt(reader, zoneId, at, 100, null)));
      times[1].push(
        await secondsOf(() =>
          tx.execute(sql`
            select job_key, stay_from, left_at from record
            where organisation_id = ${organisationId} and site_id = ${siteId}
              and area_id = ${zoneId}
              and stay_from <= ${new Date(at).toISOString()}::timestamptz
              and (left_at is null or left_at > ${new Date(at).toISOString()}::timestamptz)
            order by stay_from limit 100`),
        ),
      );
    }
    return times;
  });
  await migrating.execute(sql`drop index bench_plain`);
  return { ours: median(ours) * 1000, plain: median(plain) * 1000 };
}

/** Brings statistics and visibility up to date, as the server's own upkeep does between loads. */
export const upkeep = (migrating: Database) => migrating.execute(sql`vacuum analyze`);
