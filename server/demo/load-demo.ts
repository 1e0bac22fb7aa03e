import type { Clock } from '../clock.ts';
import type { Database } from '../db/client.ts';
import { sql } from 'drizzle-orm';
import { recordAct } from '../audit/record-act.ts';
import { createSiteIn } from '../sites/create-site.ts';
import { createArea } from '../sites/write-zones.ts';
import { fellgate, lowmoor, makeDemoAccounts } from './accounts.ts';

/** The areas of the Main depot, in order of flow. */
const depotAreas = [
  'Receiving',
  'Strip-down',
  'Cleaning',
  'Repair bench',
  'Burn-in',
  'Calibration',
  'Final check',
  'Dispatch',
];

const sites = [
  { firm: lowmoor, name: 'Main depot', timeZone: 'Europe/Dublin', areas: depotAreas },
  { firm: fellgate, name: 'Works', timeZone: 'Europe/London', areas: [] },
];

/** Makes the demo's organisations, people and sites in a database that has no organisation yet. */
export async function loadDemo(db: Database, clock: Clock): Promise<void> {
  const { rows } = await db.execute(
    sql`/* any organisation */ select exists (select from organisation) as found`,
  );
  if (rows[0]?.found === true) return;
  const organisations = await makeDemoAccounts(db, clock);
  for (const { firm, name, timeZone, areas } of sites) {
    const organisationId = organisations.get(firm) ?? 0;
    await createSiteIn(db, organisationId, { name, timeZone }, clock.now(), async (tx, siteId) => {
      const writer = { tx, organisationId, siteId };
      for (const area of areas) await createArea(writer, { name: area });
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor: { kind: 'stranger' },
        action: 'site.create',
        subjectKind: 'site',
        subjectId: siteId,
        after: { name, timeZone, areas },
      });
    });
  }
}
