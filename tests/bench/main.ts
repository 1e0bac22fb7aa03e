import { chmodSync, mkdtempSync, rmSync } from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { connect } from '../../server/db/client.ts';
import { startEmbedded } from '../../server/db/embedded.ts';
import { migrateDatabase } from '../../server/db/migrate.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import {
  insideMilliseconds,
  rawCopySeconds,
  rebuildSeconds,
  upkeep,
  windowQuerySeconds,
} from './database.ts';
import { measureClient } from './client.ts';
import { fuzz } from './fuzz.ts';
import { kill } from './kills.ts';
import { median, medianSeconds, report } from './measure.ts';
import { measureMemory } from './memory.ts';
import { BenchServer } from './server.ts';
import { writeSimulatedLog } from './simulated-log.ts';
import { measureWorkbook } from './workbook.ts';

/**
 * Speed, as ratios within one run. `npm run bench` measures at 1,000,000 rows, `npm run bench -- --large`
 * at 10,000,000 with the bars for that size. Ends with 1 where a bar was missed.
 *
 * Three more measures take minutes and have switches of their own: `--kills` kills server and database at ten
 * moments of an upload of 300,000 rows, `--fuzz` reads 10,000 exports to which something happened, and `--memory`
 * weighs the server while it takes in 5,000,000 rows.
 */
const large = process.argv.includes('--large');
const million = 1_000_000;
const size = large ? 10 * million : million;
const year = { from: new Date('2025-01-01T00:00:00Z'), days: 360 };

const folder = mkdtempSync(path.join(os.tmpdir(), 'weirmark-bench-'));
// PostgreSQL's own user has to come to its data below it.
chmodSync(folder, 0o755);
const say = (line: string) => process.stdout.write(`${line}\n`);
const logFile = async (name: string, rows: number, seed: number, span = year) => {
  const file = path.join(folder, `${name}.csv`);
  await writeSimulatedLog({ file, rows, prefix: name, seed, ...span });
  return file;
};

const alone: Readonly<Record<string, () => Promise<boolean>>> = {
  '--kills': () => kill(folder),
  '--fuzz': () => fuzz(10_000, 20_261_202),
  '--memory': async () => {
    await measureMemory(folder, bar);
    return met;
  },
};
let met = true;
const bar = (given: Parameters<typeof report>[0]) => {
  met = report(given) && met;
};
for (const [asked, measure] of Object.entries(alone)) {
  if (!process.argv.includes(asked)) continue;
  const isMet = await measure().finally(() => {
    rmSync(folder, { recursive: true, force: true });
  });
  process.exit(isMet ? 0 : 1);
}

const cluster = await startEmbedded({ dataDir: path.join(folder, 'cluster'), kind: 'start', say });
const stops: (() => Promise<unknown>)[] = [() => cluster.stop()];
try {
  const { applicationUrl } = await migrateDatabase(cluster.migratingUrl);
  const migrating = connect(cluster.migratingUrl, { max: 2 });
  const db = connect(applicationUrl, { max: 2 });
  await measureWorkbook(cluster.migratingUrl, folder, bar);
  const server = await BenchServer.start(cluster.migratingUrl);
  stops.push(
    () => server.stop(),
    () => db.$client.end(),
    () => migrating.$client.end(),
  );

  say(`Writing simulated logs of ${size / million} M rows …`);
  const small = await logFile('S', 100_000, 1);
  const base = await logFile('A', size, 2);
  // The next year's export: it comes after what the site has.
  const nextYear = { from: new Date('2025-12-28T00:00:00Z'), days: 330 };
  const oneMillion = await logFile('B', million, 3, nextYear);
  const weekly = await logFile('C', 10_000, 4, { from: new Date('2025-08-04T00:00:00Z'), days: 6 });

  const rawCopy = median([
    await rawCopySeconds(migrating, oneMillion),
    await rawCopySeconds(migrating, oneMillion),
    await rawCopySeconds(migrating, oneMillion),
  ]);
  say(`Raw COPY of 1 M rows: ${rawCopy.toFixed(2)} s, the floor of this machine\n`);

  const smallSite = await server.makeSite('0.1 M');
  await server.upload(smallSite, small);
  const smallMemory = server.peakMegabytes();
  const site = await server.makeSite('Large');
  await server.upload(site, base);
  await upkeep(migrating);
  const imported = await server.upload(site, oneMillion);
  bar({
    what: `1 M rows of the next year into a site with ${size / million} M / raw COPY`,
    value: imported.seconds / rawCopy,
    unit: '×',
    atMost: 40,
  });
  bar({
    what: 'read, check and stage alone / raw COPY',
    value: imported.readSeconds / rawCopy,
    unit: '×',
    atMost: 4,
  });
  bar({
    what: `server memory, ${size / million} M rows / 0.1 M rows`,
    value: server.peakMegabytes() / smallMemory,
    unit: '×',
    atMost: 1.2,
  });
  bar({ what: 'server memory at most', value: server.peakMegabytes(), unit: 'MB', atMost: 200 });
  await upkeep(migrating);

  const floorOf = (siteId: number, run: number) => {
    // Another last hour each time: no answer is kept.
    const to = new Date(year.from.getTime() + year.days * 86_400_000 - run * 86_400_000);
    const asked = new URLSearchParams({ from: year.from.toISOString(), to: to.toISOString() });
    return server.call(`/api/sites/${siteId}/floor?${asked.toString()}`);
  };
  const smallFloor = await medianSeconds(15, (run) => floorOf(smallSite, run));
  const largeFloor = await medianSeconds(15, (run) => floorOf(site, run));
  bar({
    what: `Floor over a year, ${size / million} M / 0.1 M records`,
    value: largeFloor / smallFloor,
    unit: '×',
    atMost: 1.3,
  });
  bar({
    what: 'window query on raw stays / Floor',
    value: (await windowQuerySeconds(db, site)) / largeFloor,
    unit: '×',
    atLeast: large ? 250 : 50,
  });
  const cached = await medianSeconds(50, () => floorOf(site, 0));
  bar({
    what: 'Floor kept / Floor made, requests per second',
    value: largeFloor / cached,
    unit: '×',
    atLeast: 20,
  });

  const zones = await server.call<Zone[]>(`/api/sites/${site}/zones`);
  const moments = Array.from(
    { length: 60 },
    (_, index) => year.from.getTime() + (index + 20) * 4.1 * 86_400_000,
  );
  const inside = await insideMilliseconds(migrating, db, site, zones[0]?.id ?? 0, moments);
  bar({
    what: 'who was inside: plain index / ours',
    value: inside.plain / inside.ours,
    unit: '×',
    ...(large ? { atLeast: 50 } : {}),
  });
  bar({ what: 'who was inside, median', value: inside.ours, unit: 'ms', atMost: 5 });

  const refreshed = await server.upload(site, weekly);
  const withdrawn = await server.withdraw(site, refreshed.id);
  const rebuilt = await rebuildSeconds(db, site);
  bar({
    what: 'rebuild / refresh after 10,000 rows',
    value: rebuilt / refreshed.seconds,
    unit: '×',
    ...(large ? { atLeast: 20 } : {}),
  });
  bar({
    what: 'withdraw an upload of 10,000 rows / load it',
    value: withdrawn / refreshed.seconds,
    unit: '×',
    atMost: 1.5,
  });
  const years = await server.makeSite('Three years');
  await server.upload(
    years,
    await logFile('Y', 40_000, 5, { from: new Date('2023-01-02T00:00:00Z'), days: 1095 }),
  );
  const [oneZone] = await server.call<Zone[]>(`/api/sites/${years}/zones`);
  const client = await measureClient(server.origin, years, oneZone?.id ?? 0);
  if (client === null) say('There is no Chromium: the client was not measured.');
  else {
    const { firstLoadKilobytes: value, longestTaskMs, framesPerSecond } = client;
    bar({ what: 'client: first load of Floor, compressed', value, unit: 'kB', atMost: 250 });
    const dragged = 'client: ruler dragged over three years of days,';
    bar({ what: `${dragged} longest task`, value: longestTaskMs, unit: 'ms', atMost: 50 });
    // A frame may come a little early or late; 60 a second in the middle is told as 59 to 61.
    bar({ what: `${dragged} frames`, value: framesPerSecond, unit: '/ s', atLeast: 59 });
  }
  say(
    `\nIn this run: import ${imported.seconds.toFixed(1)} s, Floor ${(largeFloor * 1000).toFixed(0)} ms, refresh ${refreshed.seconds.toFixed(2)} s, withdraw ${withdrawn.toFixed(2)} s, rebuild ${rebuilt.toFixed(1)} s.`,
  );
} finally {
  for (const stop of stops.reverse()) await stop();
  rmSync(folder, { recursive: true, force: true });
}
process.exitCode = met ? 0 : 1;
