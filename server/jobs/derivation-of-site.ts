import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { zoneRules } from '../../shared/local-time.ts';
import type { Database, Transaction } from '../db/client.ts';
import { withTenant } from '../db/tenant.ts';
import type { Derivation } from '../flow/derive/derivation.ts';
import { readAreaMoves } from '../flow/read-area-moves.ts';

const siteRow = z.object({
  time_zone: z.string(),
  lost_finish: z.enum(['infer', 'leave-open']),
  new_pass_after_days: z.number(),
});

/** Memory for sorts and hashes of one load: it runs alone at its site, and large loads are sorts. */
const workMemory = '256MB';

/** Runs `work` in one transaction on the site with its settings: everything of it happens, or nothing. */
export function inDerivation<Result>(
  connection: Database,
  organisationId: number,
  siteId: number,
  work: (derivation: Derivation) => Promise<Result>,
): Promise<Result> {
  return withTenant(connection, organisationId, async (tx) => {
    await tx.execute(sql`select set_config('work_mem', ${workMemory}, true)`);
    return work({
      tx,
      organisationId,
      siteId,
      ...(await readSettings(tx, organisationId, siteId)),
      moves: await readAreaMoves({ tx, organisationId, siteId }),
    });
  });
}

async function readSettings(tx: Transaction, organisationId: number, siteId: number) {
  const { rows } = await tx.execute(sql`/* site settings */
    select time_zone, lost_finish, new_pass_after_days from site
    where organisation_id = ${organisationId} and id = ${siteId}`);
  const site = siteRow.parse(rows[0]);
  return {
    rules: zoneRules(site.time_zone),
    inferLostFinish: site.lost_finish === 'infer',
    newPassAfterDays: site.new_pass_after_days,
  };
}
