import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { localDay, stepBorders } from '../../../shared/local-time.ts';
import type { Derivation } from './derivation.ts';
import { gridOfHours, gridOfTouchedHours } from './grid-of-hours.ts';
import { mergeRecords } from './merge-records.ts';
import { refreshZones, tellZones, type DerivedZone } from './refresh-zones.ts';
import { replaceFlowDays, replaceTouchedFlowDays } from './replace-flow-days.ts';
import {
  markMonthsFrom,
  markMonthsOfTouchedDays,
  replaceFlowMonths,
} from './replace-flow-months.ts';
import { replaceLevelDays } from './replace-level-days.ts';
import { replaceLevelHours, replaceTouchedLevelHours } from './replace-level-hours.ts';
import { findChangedJobs, replaceRecords } from './replace-records.ts';
import { replaceStays } from './replace-stays.ts';
import { gatherToldRows, touchEveryJob } from './told-rows.ts';
import {
  createTouchedHours,
  readTouchedZones,
  spanTouchedHours,
  touchHoursOfChangedJobs,
} from './touched-hours.ts';

/**
 * Brings records, stays, levels and days up to date with the told rows of the jobs in `touched_job`
 * (see `createTouchedJobs`), and touches nothing else. The answer is the same as a rebuild's.
 */
export async function deriveTouchedJobs(derivation: Derivation): Promise<void> {
  await gatherToldRows(derivation);
  await deriveFromToldRows(derivation);
}

/** The same, where `told_row` was gathered already. */
export async function deriveFromToldRows(derivation: Derivation): Promise<void> {
  const zones = await tellZones(derivation);
  if (await isMostOfSite(derivation)) await deriveMost(derivation, zones);
  else await deriveFew(derivation, zones);
  await finish(derivation);
}

/** Where most jobs are touched: finding the hours to make would cost more than making all from the first on. */
async function deriveMost(derivation: Derivation, zones: readonly DerivedZone[]): Promise<void> {
  await joinByHash(derivation, true);
  await mergeRecords(derivation);
  await findChangedJobs(derivation);
  const first = await firstChange(derivation);
  await replaceRecords(derivation);
  await replaceStays(derivation, changedJobs);
  await joinByHash(derivation, false);
  const whole = zones.filter((zone) => zone.unitsChanged);
  const others = zones.filter((zone) => !zone.unitsChanged);
  await deriveLevels(derivation, whole, -Infinity);
  if (first !== null) await deriveLevels(derivation, others, startOfDay(derivation, first));
}

/** Where few jobs are touched, among many that stand: only the hours in which something changes are made. */
async function deriveFew(derivation: Derivation, zones: readonly DerivedZone[]): Promise<void> {
  await mergeRecords(derivation);
  await findChangedJobs(derivation);
  await createTouchedHours(derivation);
  await touchHoursOfChangedJobs(derivation);
  await replaceRecords(derivation);
  await replaceStays(derivation, changedJobs);
  await touchHoursOfChangedJobs(derivation);
  await deriveTouchedLevels(derivation, zones);
}

const changedJobs = sql`select job_key from changed_job`;

/** Derives everything from the told rows, whatever stands. */
export async function rebuildSite(derivation: Derivation): Promise<void> {
  const { tx } = derivation;
  const zones = await tellZones(derivation);
  await touchEveryJob(derivation);
  await gatherToldRows(derivation);
  await mergeRecords(derivation);
  await tx.execute(sql`drop table if exists changed_job`);
  await tx.execute(sql`create temp table changed_job on commit drop as select * from touched_job`);
  await replaceRecords(derivation);
  await replaceStays(derivation, changedJobs);
  await deriveLevels(derivation, zones, -Infinity);
  await finish(derivation);
}

/** Derives the stays, levels and days of one zone of several areas, for a loop that is new or changed. */
export async function deriveZone(derivation: Derivation, zoneId: number): Promise<void> {
  const { organisationId, siteId } = derivation;
  const zones = await tellZones(derivation);
  await joinByHash(derivation, true);
  await replaceStays(
    derivation,
    sql`select job_key from record where organisation_id = ${organisationId} and site_id = ${siteId}`,
    zoneId,
  );
  await joinByHash(derivation, false);
  await deriveLevels(
    derivation,
    zones.filter((zone) => zone.id === zoneId),
    -Infinity,
  );
  await finish(derivation);
}

/**
 * A load that brings most of a site, and a zone that is new, work on whole tables, of which the planner may
 * have no count yet: it would look each row up. Until set back, it joins by hash.
 */
async function joinByHash({ tx }: Derivation, hash: boolean): Promise<void> {
  await tx.execute(
    sql`/* way of joining */ select set_config('enable_nestloop', ${hash ? 'off' : 'on'}, true)`,
  );
}

/**
 * Whether so many jobs are touched, against those that stand, that making every level afresh costs less than
 * finding the hours to make.
 */
async function isMostOfSite({ tx, organisationId, siteId }: Derivation): Promise<boolean> {
  const { rows } = await tx.execute(sql`/* share of touched jobs */
    with touched as (select count(*) as jobs from touched_job),
    standing as (
      -- Counts no further than the answer needs.
      select count(*) as jobs from (
        select from stay join zone
          on zone.organisation_id = stay.organisation_id
          and zone.site_id = stay.site_id
          and zone.id = stay.zone_id
        where stay.organisation_id = ${organisationId} and stay.site_id = ${siteId}
          and zone.kind = 'site'
        limit (select 4 * jobs + 1 from touched)
      ) as counted
    )
    select standing.jobs <= 4 * touched.jobs as mostly from standing cross join touched`);
  return rows[0]?.mostly === true;
}

/** The first moment at which a changed job comes, starts or leaves anywhere, as it stood or as it is merged. */
async function firstChange({ tx, organisationId, siteId }: Derivation): Promise<number | null> {
  const { rows } = await tx.execute(sql`/* first change */
    select least(
      (select min(least(arrived, started, finished, entered)) from merged_record),
      (
        select min(least(arrived, started, finished, entered))
        from record join changed_job using (job_key)
        where organisation_id = ${organisationId} and site_id = ${siteId}
      )
    ) as first`);
  return z.object({ first: z.coerce.date().nullable() }).parse(rows[0]).first?.getTime() ?? null;
}

/** Hours, days and departures of the given zones from the local day that begins at `from` on. */
async function deriveLevels(
  derivation: Derivation,
  zones: readonly DerivedZone[],
  from: number,
): Promise<void> {
  if (zones.length === 0) return;
  await replaceLevelHours(derivation, zones, from);
  const grid = await gridOfHours(derivation);
  const ids = zones.map((zone) => zone.id);
  if (!grid) return removeDays(derivation, ids);
  await replaceLevelDays(derivation, new Map(ids.map((id) => [id, from])), grid);
  await replaceFlowDays(derivation, ids, grid, from);
  await markMonthsFrom(
    derivation,
    ids,
    from === -Infinity ? null : localDay(derivation.rules, from),
  );
  await replaceFlowMonths(derivation);
}

const startOfDay = ({ rules }: Derivation, at: number): number =>
  stepBorders(rules, 'day', at, at + 1)[0] ?? at;

/** Makes the touched hours, and all hours of zones of which most are touched. */
async function deriveTouchedLevels(
  derivation: Derivation,
  zones: readonly DerivedZone[],
): Promise<void> {
  const touched = await readTouchedZones(derivation);
  const from = new Map(
    touched.filter((zone) => zone.mostly).map((zone) => [zone.zoneId, zone.from]),
  );
  for (const zone of zones) if (zone.unitsChanged) from.set(zone.id, -Infinity);
  if (from.size > 0) await deriveZonesFrom(derivation, zones, from);
  const parts = touched.filter((zone) => !from.has(zone.zoneId));
  if (parts.length === 0) return;
  const grid = await gridOfTouchedHours(derivation);
  if (!grid) return;
  await spanTouchedHours(derivation, grid);
  await replaceTouchedLevelHours(derivation);
  await replaceTouchedFlowDays(derivation, grid);
  await markMonthsOfTouchedDays(derivation);
  await replaceFlowMonths(derivation);
  const wide = (await gridOfHours(derivation)) ?? grid;
  await replaceLevelDays(derivation, new Map(parts.map((zone) => [zone.zoneId, zone.from])), wide);
}

/** Zones of which so many hours are touched that all from the first on are made. */
async function deriveZonesFrom(
  derivation: Derivation,
  zones: readonly DerivedZone[],
  from: ReadonlyMap<number, number>,
): Promise<void> {
  await derivation.tx.execute(sql`/* leave these zones to the other way */
    delete from touched_hour where zone_id = any(${sql.param([...from.keys()])}::integer[])`);
  for (const zone of zones) {
    const begins = from.get(zone.id);
    if (begins !== undefined) await deriveLevels(derivation, [zone], begins);
  }
}

async function finish(derivation: Derivation): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  await refreshZones(derivation);
  await tx.execute(sql`/* new data version */
    update site set data_version = data_version + 1
    where organisation_id = ${organisationId} and id = ${siteId}`);
}

async function removeDays(derivation: Derivation, zones: readonly number[]): Promise<void> {
  const { tx, organisationId, siteId } = derivation;
  const ofZones = sql`organisation_id = ${organisationId} and site_id = ${siteId}
    and zone_id = any(${sql.param([...zones])}::integer[])`;
  await tx.execute(sql`/* remove days */ delete from level_day where ${ofZones}`);
  await tx.execute(sql`/* remove days */ delete from flow_day where ${ofZones}`);
  await tx.execute(sql`/* remove months */ delete from flow_month where ${ofZones}`);
}
