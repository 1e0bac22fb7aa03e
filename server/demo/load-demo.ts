import { sql } from 'drizzle-orm';
import type { Clock } from '../clock.ts';
import type { Database, Transaction } from '../db/client.ts';
import { recordAct } from '../audit/record-act.ts';
import { createSiteIn } from '../sites/create-site.ts';
import { declareServers } from '../sites/declare-servers.ts';
import { createArea } from '../sites/write-areas.ts';
import { fellgate, lowmoor, makeDemoAccounts } from './accounts.ts';
import { areas, type PlantArea } from './plant/plan.ts';

/** The demo's site with the plant's data. */
export const mainDepot = 'Main depot';

const sites = [
  {
    firm: lowmoor,
    name: mainDepot,
    timeZone: 'Europe/Dublin',
    areas,
  },
  { firm: fellgate, name: 'Works', timeZone: 'Europe/London', areas: [] },
];

/**
 * Makes the demo's organisations, people and sites in a database that has no organisation yet: all of it
 * or nothing, and once, however many servers start together.
 */
export function loadDemo(db: Database, clock: Clock): Promise<void> {
  return db.transaction(async (tx) => {
    if (!(await isEmpty(tx))) return;
    const now = clock.now();
    const organisations = await makeDemoAccounts(tx, now);
    for (const { firm, ...site } of sites)
      await makeDemoSite(tx, organisations.get(firm) ?? 0, site, now);
  });
}

async function isEmpty(tx: Transaction): Promise<boolean> {
  await tx.execute(sql`/* one demo */ lock table organisation in exclusive mode`);
  const { rows } = await tx.execute(
    sql`/* any organisation */ select exists (select from organisation) as found`,
  );
  return rows[0]?.found !== true;
}

async function makeDemoSite(
  outer: Transaction,
  organisationId: number,
  { name, timeZone, areas }: { name: string; timeZone: string; areas: readonly PlantArea[] },
  now: Date,
): Promise<void> {
  await createSiteIn(outer, organisationId, { name, timeZone }, now, async (tx, siteId) => {
    const writer = { tx, organisationId, siteId };
    for (const area of areas)
      await declareServers(writer, await createArea(writer, area), area.servers, null);
    await recordAct(tx, {
      organisationId,
      siteId,
      at: now,
      actor: { kind: 'stranger' },
      action: 'site.create',
      subjectKind: 'site',
      subjectId: siteId,
      after: { name, timeZone, areas },
    });
  });
}
