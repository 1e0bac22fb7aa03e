import { startEmbedded, type EmbeddedDatabase } from '../../server/db/embedded.ts';
import { migrateDatabase } from '../../server/db/migrate.ts';

/** Where a test finds the template that it clones. */
export interface TestDatabases {
  migratingUrl: string;
  applicationUrl: string;
}

export const templateName = 'weirmark';

/** Starts a throw-away cluster whose database `weirmark` is migrated: the template of all others. */
export async function startTestCluster(): Promise<TestDatabases & { cluster: EmbeddedDatabase }> {
  const cluster = await startEmbedded({ kind: 'test', say: () => undefined });
  const { applicationUrl } = await migrateDatabase(cluster.migratingUrl);
  return { cluster, migratingUrl: cluster.migratingUrl, applicationUrl };
}
