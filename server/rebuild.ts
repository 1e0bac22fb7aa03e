import { connect, type Database } from './db/client.ts';
import { startEmbedded } from './db/embedded.ts';
import { migrateDatabase } from './db/migrate.ts';
import { siteDirectory } from './db/schema/sites.ts';
import { readEnv } from './env.ts';
import { readDerived } from './flow/derived-state.ts';
import { rebuildSite } from './flow/derive/derive.ts';
import { inDerivation } from './jobs/derivation-of-site.ts';

/**
 * Derives every site of a database afresh from its told rows and compares: a rebuild changes nothing. Ends
 * with 1 where something differed (it is right afterwards).
 */
const say = (line: string) => process.stdout.write(`${line}\n`);

async function main(): Promise<boolean> {
  const env = readEnv(process.env);
  const local =
    env.DATABASE_URL === undefined
      ? await startEmbedded({
          ...(env.WEIRMARK_DATA_DIR === undefined ? {} : { dataDir: env.WEIRMARK_DATA_DIR }),
          kind: 'start',
          say,
        })
      : null;
  try {
    const url = env.DATABASE_URL ?? local?.migratingUrl ?? '';
    const { applicationUrl } = await migrateDatabase(url, env.DATABASE_APP_URL);
    const db = connect(applicationUrl, { max: 2 });
    try {
      return await rebuildAll(db);
    } finally {
      await db.$client.end();
    }
  } finally {
    await local?.stop();
  }
}

async function rebuildAll(db: Database): Promise<boolean> {
  let same = true;
  for (const { organisationId, siteId } of await db.select().from(siteDirectory)) {
    const differing = await rebuildOne(db, organisationId, siteId);
    same &&= differing.length === 0;
    say(
      differing.length === 0
        ? `Site ${siteId}: rebuilt, nothing differed.`
        : `Site ${siteId}: rebuilt; these differed and are right now: ${differing.join(', ')}.`,
    );
  }
  return same;
}

async function rebuildOne(db: Database, organisationId: number, siteId: number): Promise<string[]> {
  return inDerivation(db, organisationId, siteId, async (derivation) => {
    const before = await readDerived(derivation.tx, organisationId, siteId);
    await rebuildSite(derivation);
    const after = await readDerived(derivation.tx, organisationId, siteId);
    return after
      .filter((state, index) => JSON.stringify(state) !== JSON.stringify(before[index]))
      .map((state) => state.table);
  });
}

process.exitCode = (await main()) ? 0 : 1;
