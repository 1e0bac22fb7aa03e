import { createReadStream } from 'node:fs';
import { readdir } from 'node:fs/promises';
import path from 'node:path';
import { fileURLToPath } from 'node:url';
import { and, eq, ne } from 'drizzle-orm';
import { organisation, person } from '../db/schema/people.ts';
import { site } from '../db/schema/sites.ts';
import { upload } from '../db/schema/uploads.ts';
import { withTenant } from '../db/tenant.ts';
import { receiveFile } from '../intake/receive-upload.ts';
import { workOnSite, type SiteWork } from '../jobs/site-work.ts';
import { lowmoor } from './accounts.ts';
import { declareAgreedCap, type Depot } from './declare-agreed-cap.ts';
import { mainDepot } from './load-demo.ts';

const samples = fileURLToPath(new URL('../../samples/', import.meta.url));
const isPlantExport = (name: string) => /^lowmoor-\d{4}-\d{2}\.csv$/.test(name);
/** Of servers that start together one loads, the others wait for it. */
const loadingLock = 7_261_908;

/**
 * Loads the demo plant into the demo's depot, export by export through the intake: what is missing of it, so
 * that a start that was broken off goes on. A depot that holds uploads of anybody else is left alone.
 *
 * @param say told a line for each export
 */
export async function loadPlant(
  work: SiteWork,
  say: (line: string) => void,
  stopping: AbortSignal,
  folder = samples,
): Promise<void> {
  const client = await work.db.$client.connect();
  try {
    await client.query('select pg_advisory_lock($1)', [loadingLock]);
    const depot = await findDepot(work);
    if (!depot) return;
    const names = (await readdir(folder)).filter(isPlantExport).sort();
    const given = await uploadsOf(work, depot);
    if (given.some(({ fileName }) => !names.includes(fileName))) return;
    for (const [index, name] of names.entries()) {
      const known = given.find(({ fileName }) => fileName === name);
      if (known && !isUnderWay(known)) continue;
      say(`Loading the demo plant, file ${index + 1} of ${names.length} …`);
      if (!known) await hand(work, depot, path.join(folder, name));
      await finishWork(work, depot, stopping);
    }
    // Last: a loop is derived quickest from records that the database knows already.
    if (await declareAgreedCap(work, depot)) await finishWork(work, depot, stopping);
  } finally {
    await client.query('select pg_advisory_unlock($1)', [loadingLock]);
    client.release();
  }
}

async function findDepot({ db }: SiteWork): Promise<Depot | null> {
  const [firm] = await db.select().from(organisation).where(eq(organisation.name, lowmoor));
  const [analyst] = await db
    .select()
    .from(person)
    .where(eq(person.email, 'analyst@lowmoor.example'));
  if (!firm || !analyst) return null;
  const [depot] = await withTenant(db, firm.id, (tx) =>
    tx
      .select({ id: site.id })
      .from(site)
      .where(and(eq(site.organisationId, firm.id), eq(site.name, mainDepot))),
  );
  return depot ? { organisationId: firm.id, siteId: depot.id, personId: analyst.id } : null;
}

const uploadsOf = ({ db }: SiteWork, { organisationId, siteId }: Depot) =>
  withTenant(db, organisationId, (tx) =>
    tx
      .select({ fileName: upload.fileName, status: upload.status })
      .from(upload)
      .where(
        and(
          eq(upload.organisationId, organisationId),
          eq(upload.siteId, siteId),
          // What was broken off while it was being handed over is handed over again.
          ne(upload.status, 'receiving'),
        ),
      ),
  );

const isUnderWay = ({ status }: { status: string }) =>
  ['waiting', 'reading', 'loading'].includes(status);

async function hand(work: SiteWork, { personId, ...key }: Depot, file: string): Promise<void> {
  await receiveFile(createReadStream(file), path.basename(file), key, {
    db: work.db,
    clock: work.clock,
    actor: { kind: 'person', personId },
  });
}

const lookEveryMs = 200;

/** Works on the depot until nothing waits; where another server is at it, until that one is done. */
async function finishWork(work: SiteWork, depot: Depot, stopping: AbortSignal): Promise<void> {
  for (;;) {
    await workOnSite(work, depot.organisationId, depot.siteId, stopping);
    stopping.throwIfAborted();
    if (!(await uploadsOf(work, depot)).some(isUnderWay)) return;
    await new Promise((resolve) => setTimeout(resolve, lookEveryMs));
  }
}
