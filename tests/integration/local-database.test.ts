import {
  chmodSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  rmSync,
  statSync,
  writeFileSync,
} from 'node:fs';
import os from 'node:os';
import path from 'node:path';
import { Client } from 'pg';
import { afterEach, beforeEach, expect, test } from 'vitest';
import {
  databaseProcesses,
  databaseUrl,
  endServers,
  killDatabase,
  startServer,
} from '../support/server-process.ts';

let parent: string;
let folder: string;

beforeEach(() => {
  parent = mkdtempSync(path.join(os.tmpdir(), 'weirmark start-'));
  // Closed to others by mkdtemp; as root, the user that runs PostgreSQL has to get through.
  chmodSync(parent, 0o755);
  folder = path.join(parent, 'local');
  mkdirSync(folder);
});

afterEach(async () => {
  await endServers();
  rmSync(parent, { recursive: true, force: true });
});

const siteCount = async () => {
  const client = new Client({ connectionString: databaseUrl(folder) });
  await client.connect();
  const { rows } = await client.query<{ sites: number }>(
    'select count(*)::int as sites from site_directory',
  );
  await client.end();
  return rows[0]?.sites;
};

test('two servers that start at once from nothing share one database, and the last to stop stops it', async () => {
  const [one, other] = await Promise.all([startServer(folder), startServer(folder)]);
  for (const { origin } of [one, other])
    expect(await (await fetch(`${origin}/api/health`)).json()).toMatchObject({
      status: 'ok',
      database: 'ok',
    });
  expect(await siteCount()).toBeGreaterThan(0);

  await one.end('SIGTERM');
  expect((await fetch(`${other.origin}/api/health`)).status).toBe(200);
  await other.end('SIGINT');
  expect(databaseProcesses(folder)).toBe(0);
});

test('a second server on a taken port says so, and leaves the first its database', async () => {
  const server = await startServer(folder);
  const port = Number(new URL(server.origin).port);
  await expect(startServer(folder, port)).rejects.toThrow(`Port ${port} on 127.0.0.1 is taken`);
  expect((await fetch(`${server.origin}/api/health`)).status).toBe(200);
  await server.end('SIGTERM');
  expect(databaseProcesses(folder)).toBe(0);
});

test('the next start takes over from a killed server, and recovers a killed database', async () => {
  const first = await startServer(folder);
  const sites = await siteCount();
  await first.end('SIGKILL');
  expect(databaseProcesses(folder)).toBeGreaterThan(0);

  const second = await startServer(folder);
  const busy = new Client({ connectionString: databaseUrl(folder) });
  busy.on('error', () => undefined);
  await busy.connect();
  // Its process does not see that the database is dead before the statement ends, in some minutes.
  const broken = busy.query('select count(*) from generate_series(1, 3000000000)').catch(String);
  await second.end('SIGKILL');
  killDatabase(folder);

  const third = await startServer(folder);
  expect(await siteCount()).toBe(sites);
  expect(await broken).toMatch(/terminat/);
  await third.end('SIGTERM');
  expect(databaseProcesses(folder)).toBe(0);
});

test('a folder that holds something else is not taken, nor closed to others', async () => {
  mkdirSync(path.join(folder, 'data'));
  writeFileSync(path.join(folder, 'data', 'letters.txt'), 'kept');
  await expect(startServer(folder)).rejects.toThrow('it holds something else');
  expect(readdirSync(path.join(folder, 'data'))).toEqual(['letters.txt']);
  expect(statSync(folder).mode & 0o777).toBe(0o755);
});
