import { and, eq } from 'drizzle-orm';
import type { Planted } from '../../shared/contracts/demo.ts';
import type { Transaction } from '../db/client.ts';
import { organisation } from '../db/schema/people.ts';
import { upload } from '../db/schema/uploads.ts';
import { zone } from '../db/schema/zones.ts';
import { lowmoor } from './accounts.ts';
import {
  agreedCap,
  calibrationRests,
  chamberSlots,
  lostWeek,
  slowBench,
  span,
} from './plant/plan.ts';

const day = 86_400_000;
const iso = (at: number) => new Date(at).toISOString();
const firstExport = 'lowmoor-2026-06.csv';

/** What is planted at a site; null where it is not the demo's depot with the plant's exports. */
export async function readPlantedOf(
  tx: Transaction,
  organisationId: number,
  siteId: number,
): Promise<Planted[] | null> {
  const [plant] = await tx
    .select({ id: upload.id })
    .from(upload)
    .innerJoin(organisation, eq(organisation.id, upload.organisationId))
    .where(
      and(
        eq(upload.organisationId, organisationId),
        eq(upload.siteId, siteId),
        eq(upload.fileName, firstExport),
        eq(upload.status, 'loaded'),
        eq(organisation.name, lowmoor),
      ),
    )
    .limit(1);
  if (!plant) return null;
  const zones = await tx
    .select({ id: zone.id, name: zone.name })
    .from(zone)
    .where(and(eq(zone.organisationId, organisationId), eq(zone.siteId, siteId)));
  const named = (...names: string[]) => zones.filter(({ name }) => names.includes(name));
  const loop = named(agreedCap.name);
  const rests = calibrationRests.map(({ from }) => from);
  return [
    {
      kind: 'rising',
      zones: named('Repair bench'),
      from: iso(slowBench.from - 28 * day),
      to: iso(span.until),
      since: iso(slowBench.from),
      limit: null,
    },
    {
      kind: 'held',
      zones: named('Burn-in'),
      from: iso(span.from),
      to: iso(span.until),
      since: null,
      limit: chamberSlots,
    },
    {
      kind: 'overrun',
      zones: loop.length > 0 ? loop : named(...agreedCap.areas),
      from: iso(Math.min(...rests) - day),
      to: iso(span.until),
      since: null,
      limit: agreedCap.limit,
    },
    {
      kind: 'lost-finishes',
      zones: named('Dispatch'),
      from: iso(lostWeek.from - 14 * day),
      to: iso(lostWeek.until + 14 * day),
      since: iso(lostWeek.from),
      limit: null,
    },
  ];
}
