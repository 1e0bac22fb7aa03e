import path from 'node:path';
import { startEmbedded } from '../../server/db/embedded.ts';
import { migrateDatabase } from '../../server/db/migrate.ts';
import type { Bar } from './measure.ts';
import { BenchServer } from './server.ts';
import { writeSimulatedLog } from './simulated-log.ts';

const sizes = { small: 100_000, large: 5_000_000 } as const;

/** The most memory that a server holds while it takes in 0.1 M and 5 M rows. */
export async function measureMemory(folder: string, bar: (bar: Bar) => void): Promise<void> {
  const say = (line: string) => process.stdout.write(`${line}\n`);
  const cluster = await startEmbedded({
    ...{ dataDir: path.join(folder, 'cluster'), kind: 'start', say },
  });
  try {
    await migrateDatabase(cluster.migratingUrl);
    const small = await peakOf(cluster.migratingUrl, folder, sizes.small);
    const large = await peakOf(cluster.migratingUrl, folder, sizes.large);
    const what = 'server memory, 5 M rows / 0.1 M rows';
    bar({ what, value: large / small, unit: '×', atMost: 1.2 });
    bar({ what: 'server memory at 0.1 M rows', value: small, unit: 'MB', atMost: 200 });
    bar({ what: 'server memory at 5 M rows', value: large, unit: 'MB', atMost: 200 });
  } finally {
    await cluster.stop();
  }
}

/** A server of its own for each: the most memory that a process has held is all that is known of it. */
async function peakOf(databaseUrl: string, folder: string, rows: number): Promise<number> {
  const file = path.join(folder, `${rows}.csv`);
  const span = { from: new Date('2025-01-01T00:00:00Z'), days: 360 };
  await writeSimulatedLog({ file, rows, prefix: 'M', seed: 8, ...span });
  const server = await BenchServer.start(databaseUrl);
  try {
    const { seconds } = await server.upload(await server.makeSite(`${rows} rows`), file);
    process.stdout.write(
      `${rows.toLocaleString('en')} rows were loaded in ${seconds.toFixed(1)} s.\n`,
    );
    return server.peakMegabytes();
  } finally {
    await server.stop();
  }
}
