import { spawn, type ChildProcess } from 'node:child_process';
import { once } from 'node:events';
import { fileURLToPath } from 'node:url';
import { createInterface } from 'node:readline';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { demoPassword } from '../../server/demo/accounts.ts';
import { cloneDatabase, type ClonedDatabase } from '../support/database.ts';

/** The server as people start it: a process of its own, killed and stopped from outside. */
const root = fileURLToPath(new URL('../..', import.meta.url));
let database: ClonedDatabase;
let running: ChildProcess[] = [];

beforeEach(async () => {
  database = await cloneDatabase();
});
afterEach(async () => {
  await Promise.all(running.map(ended));
  running = [];
  await database.drop();
});

async function ended(server: ChildProcess): Promise<void> {
  if (server.exitCode !== null || server.signalCode !== null) return;
  server.kill('SIGKILL');
  await once(server, 'exit');
}

function run(env: Record<string, string>) {
  const server = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], {
    cwd: root,
    env: {
      ...process.env,
      DATABASE_URL: database.migratingUrl,
      PORT: '0',
      WEIRMARK_DEMO: 'empty',
      LOG_LEVEL: 'fatal',
      ...env,
    },
    stdio: ['ignore', 'pipe', 'pipe'],
  });
  running.push(server);
  return server;
}

const isReady = /^Weirmark is ready at (\S+)$/;

/** What a server says, until it says something like this. */
async function saysUntil(server: ReturnType<typeof run>, last: RegExp): Promise<string[]> {
  const lines: string[] = [];
  for await (const line of createInterface({ input: server.stdout })) {
    lines.push(line);
    if (last.test(line)) return lines;
  }
  throw new Error(`The server ended before that: ${lines.join(' ')}`);
}

async function start(env: Record<string, string> = {}) {
  const server = run(env);
  const lines = await saysUntil(server, isReady);
  return { server, origin: isReady.exec(lines.at(-1) ?? '')?.[1] ?? '', lines };
}

async function signIn(origin: string): Promise<string> {
  const response = await fetch(`${origin}/api/auth/sign-in`, {
    method: 'POST',
    headers: { 'Content-Type': 'application/json' },
    body: JSON.stringify({ email: 'analyst@lowmoor.example', password: demoPassword }),
  });
  return response.headers.get('set-cookie')?.split(';')[0] ?? '';
}

const rows = 20_000;
function manyRows(): string {
  const lines = ['job,area,start,finish'];
  for (let row = 0; row < rows; row++) {
    const start = Date.UTC(2026, 0, 1) + row * 600_000;
    const stamp = (at: number) => new Date(at).toISOString();
    lines.push(`J${row % 4000},A${row % 5},${stamp(start)},${stamp(start + 3_600_000)}`);
  }
  return lines.join('\n');
}

async function upload(origin: string, cookie: string): Promise<number> {
  const form = new FormData();
  form.set('file', new Blob([manyRows()]), 'many.csv');
  const response = await fetch(`${origin}/api/sites/1/uploads`, {
    method: 'POST',
    headers: { Cookie: cookie },
    body: form,
  });
  expect(response.status).toBe(202);
  return ((await response.json()) as { id: number }).id;
}

async function until(
  origin: string,
  cookie: string,
  id: number,
  statuses: readonly Upload['status'][],
): Promise<Upload> {
  for (;;) {
    const response = await fetch(`${origin}/api/sites/1/uploads/${id}`, {
      headers: { Cookie: cookie },
    });
    const seen = (await response.json()) as Upload;
    if (statuses.includes(seen.status)) return seen;
  }
}

describe('the server process', () => {
  it('says that it is ready when it answers, and ends well when it is asked to', async () => {
    const { server, origin } = await start();
    const health = await fetch(`${origin}/api/health`);
    expect(await health.json()).toEqual({ status: 'ok', database: 'ok' });
    server.kill('SIGTERM');
    const [code] = (await once(server, 'exit')) as [number];
    expect(code).toBe(0);
  });

  it.each(['reading', 'loading'] as const)(
    'killed while an upload is %s, the next one takes it in whole',
    async (status) => {
      const first = await start();
      const id = await upload(first.origin, await signIn(first.origin));
      const seen = await until(first.origin, await signIn(first.origin), id, [
        status,
        'loading',
        'loaded',
      ]);
      await ended(first.server);
      const second = await start();
      const loaded = await until(second.origin, await signIn(second.origin), id, [
        'loaded',
        'failed',
      ]);
      expect(loaded).toMatchObject({ status: 'loaded', account: { rowsRead: rows, new: rows } });
      // What was seen before the kill tells how much the test was worth.
      expect(['reading', 'loading']).toContain(seen.status);
    },
  );

  it('two servers on one database share sessions and do the work once', async () => {
    const [one, other] = await Promise.all([start(), start()]);
    const cookie = await signIn(one.origin);
    const ids = [await upload(one.origin, cookie), await upload(other.origin, cookie)];
    const [first, second] = [
      await until(other.origin, cookie, ids[0] ?? 0, ['loaded', 'failed']),
      await until(one.origin, cookie, ids[1] ?? 0, ['loaded', 'failed']),
    ];
    expect([
      first.account.new + second.account.new,
      first.account.same + second.account.same,
    ]).toEqual([rows, rows]);
  });

  it('killed while it loads the demo plant, the next one goes on, and is ready with the whole', async () => {
    const demo = { WEIRMARK_DEMO: '1' };
    const first = run(demo);
    const file = (number: number) => `Loading the demo plant, file ${number} of 6 …`;
    expect(await saysUntil(first, /file 3 of 6/)).toEqual([1, 2, 3].map(file));
    await ended(first);
    const second = await start(demo);
    // The third was begun; the two before it are not told of again.
    expect(second.lines.slice(0, -1)).toEqual([3, 4, 5, 6].map(file));
    const answer = await fetch(`${second.origin}/api/sites/1/uploads`, {
      headers: { Cookie: await signIn(second.origin) },
    });
    const uploads = (await answer.json()) as Upload[];
    expect(uploads.map(({ fileName, status }) => [fileName.slice(8, 15), status])).toEqual(
      ['11', '10', '09', '08', '07', '06'].map((month) => [`2026-${month}`, 'loaded']),
    );
  }, 180_000);

  it('tells in one sentence what is wrong with a setting', async () => {
    const server = run({ PORT: 'eighty' });
    let told = '';
    server.stderr.on('data', (chunk: Buffer) => (told += chunk.toString()));
    const [code] = (await once(server, 'close')) as [number];
    expect([code, told.trim()]).toEqual([1, 'The setting PORT is not usable: Use a port number.']);
  });

  it('says that its port is taken', async () => {
    const { origin } = await start();
    const server = run({ PORT: new URL(origin).port });
    let told = '';
    server.stderr.on('data', (chunk: Buffer) => (told += chunk.toString()));
    const [code] = (await once(server, 'close')) as [number];
    expect(code).toBe(1);
    expect(told).toMatch(/^Port \d+ on 127\.0\.0\.1 is taken/);
  });

  it('empty and without the demo, shows where the first admin is made', async () => {
    const { origin, lines } = await start({ WEIRMARK_DEMO: '0' });
    const address = lines.find((line) => line.startsWith('Make the first admin at '));
    expect(address).toContain(`${origin}/first-admin?token=`);
  });
});
