import { sql } from 'drizzle-orm';
import { withTenant } from '../../server/db/tenant.ts';
import type { TestApp } from './app.ts';
import type { OracleEvent, PairedStay } from './event-oracle.ts';
import type { TestSite } from './site.ts';

/** How events are read that say themselves what they are. */
export const eventPlan = {
  shape: 'event',
  columns: { job: 'job', area: 'area', event: 'event', time: 'time' },
  eventWords: { arrived: ['arrived'], started: ['started'], finished: ['finished'] },
  timeZone: 'UTC',
};

export const eventsAsCsv = (events: readonly OracleEvent[]): string =>
  [
    'job,area,event,time',
    ...events.map(({ job, area, event, at }) =>
      [job, area, event, new Date(at).toISOString()].join(),
    ),
    '',
  ].join('\n');

/** Stays in an order of their own, whatever order they came in. */
export const inOrder = (stays: readonly PairedStay[]): PairedStay[] =>
  [...stays].sort((a, b) => (JSON.stringify(a) < JSON.stringify(b) ? -1 : 1));

/** The records of a site of the demo's first organisation as paired stays. */
export async function recordsOf(test: TestApp, site: TestSite): Promise<PairedStay[]> {
  const { rows } = await withTenant(test.db, 1, (tx) =>
    tx.execute(sql`/* records */
      select
        job_key as job, zone.name as area,
        (extract(epoch from arrived) * 1000)::double precision as arrived,
        (extract(epoch from started) * 1000)::double precision as started,
        (extract(epoch from finished) * 1000)::double precision as finished
      from record join zone
        on zone.organisation_id = record.organisation_id
        and zone.site_id = record.site_id and zone.id = record.area_id
      where record.site_id = ${site.id}`),
  );
  return inOrder(rows as unknown as PairedStay[]);
}
