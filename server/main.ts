import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { fileURLToPath } from 'node:url';
import { DrizzleQueryError } from 'drizzle-orm';
import { buildApp, serveClient } from './app.ts';
import { createFirstAdminGate } from './auth/first-admin.ts';
import { createSignInThrottle } from './auth/throttle.ts';
import { systemClock } from './clock.ts';
import { connect } from './db/client.ts';
import { startEmbedded } from './db/embedded.ts';
import { migrateDatabase } from './db/migrate.ts';
import { readSecret } from './db/secrets.ts';
import { loadDemo } from './demo/load-demo.ts';
import { loadPlant } from './demo/load-plant.ts';
import { readEnv, type Env } from './env.ts';
import { startWorker } from './jobs/queue.ts';
import { createLog, type Logger } from './log.ts';
import { developmentClient } from './development-client.ts';

const clientFolder = fileURLToPath(new URL('../dist', import.meta.url));
const say = (line: string) => process.stdout.write(`${line}\n`);

/** What has been started, to be stopped in the opposite order. */
type Stop = () => Promise<void>;

async function main(): Promise<void> {
  const env = readEnv(process.env);
  const log = createLog(env.LOG_LEVEL);
  const stops: Stop[] = [];
  const stopAll = async () => {
    for (const stop of stops.splice(0).reverse())
      await stop().catch((error: unknown) => {
        log.error({ err: error }, 'while stopping');
      });
  };
  // The queue's own upkeep fails while the database is away; requests are answered as soon as it is back.
  process.on('unhandledRejection', (error) => {
    log.error({ err: error }, 'left unhandled');
  });
  const stopping = new AbortController();
  let started: Promise<void> = Promise.resolve();
  onStopSignal(async () => {
    stopping.abort();
    await started.catch(() => undefined);
    await stopAll();
  });
  try {
    await (started = start(env, log, stops, stopping.signal));
  } catch (error) {
    // Whoever asked to stop while it started has it stopped, and that is no failure.
    if (stopping.signal.aborted) return;
    await stopAll();
    throw error;
  }
}

async function start(env: Env, log: Logger, stops: Stop[], stopping: AbortSignal): Promise<void> {
  const migratingUrl = env.DATABASE_URL ?? (await localDatabase(env, stops));
  stopping.throwIfAborted();
  const migrated = await migrateDatabase(migratingUrl, env.DATABASE_APP_URL);
  const onIdleError = (error: Error) => {
    log.warn({ err: error }, 'a database connection was lost');
  };
  const migrating = connect(migratingUrl, { max: 1, onIdleError });
  const db = connect(migrated.applicationUrl, { max: 12, onIdleError });
  stops.push(async () => {
    await Promise.all([migrating.$client.end(), db.$client.end()]);
  });
  const secret = await readSecret(migrating, 'session-key', randomKey);
  if (env.WEIRMARK_DEMO !== '0') await loadDemo(db, systemClock);
  const work = { db, clock: systemClock, log };
  if (env.WEIRMARK_DEMO === '1') await loadPlant(work, say, stopping);
  const { gate, token } = await createFirstAdminGate(migrating, db);
  const worker = await startWorker(migrated.applicationUrl, work, log);
  stops.push(() => worker.stop());
  stopping.throwIfAborted();
  const client = env.WEIRMARK_DEV ? await developmentClient(stops) : serveClient(clientFolder);
  const app = buildApp(
    {
      db,
      clock: systemClock,
      log,
      env,
      sessionKey: Buffer.from(secret, 'base64url'),
      throttle: createSignInThrottle(db),
      queue: worker,
      firstAdmin: gate,
      checkAnswers: false,
    },
    client,
  );
  const server = createServer(app);
  // A large file over a slow line takes as long as it takes; headers still have to come in time.
  server.requestTimeout = 0;
  stops.push(() => close(server));
  const origin = await listen(server, env);
  await answersHealth(origin);
  if (await gate.isOpen()) say(`Make the first admin at ${origin}/first-admin?token=${token}`);
  say(`Weirmark is ready at ${origin}`);
}

const randomKey = () =>
  Buffer.from(crypto.getRandomValues(new Uint8Array(32))).toString('base64url');

async function localDatabase(env: Env, stops: Stop[]): Promise<string> {
  const local = await startEmbedded({
    ...(env.WEIRMARK_DATA_DIR === undefined ? {} : { dataDir: env.WEIRMARK_DATA_DIR }),
    kind: env.WEIRMARK_DEV ? 'dev' : 'start',
    say,
  });
  stops.push(() => local.stop());
  return local.migratingUrl;
}

async function listen(server: Server, env: Env): Promise<string> {
  server.listen(env.PORT, env.HOST);
  try {
    await once(server, 'listening');
  } catch (error) {
    if (error instanceof Error && 'code' in error && error.code === 'EADDRINUSE')
      throw new Error(
        `Port ${env.PORT} on ${env.HOST} is taken, perhaps by Weirmark itself. Stop what uses it, or set PORT.`,
        { cause: error },
      );
    throw error;
  }
  const { port } = server.address() as AddressInfo;
  const host = env.HOST.includes(':') ? `[${env.HOST}]` : env.HOST;
  return `http://${host}:${port}`;
}

/** Ready means that it truly answers. */
async function answersHealth(origin: string): Promise<void> {
  const url = new URL('/api/health', origin);
  if (url.hostname === '0.0.0.0') url.hostname = '127.0.0.1';
  const answer = await fetch(url);
  if (!answer.ok) throw new Error(`The server does not answer: status ${answer.status}.`);
}

async function close(server: Server): Promise<void> {
  const closed = new Promise<void>((resolve) => server.close(() => resolve()));
  server.closeIdleConnections();
  // Whoever holds a connection open does not hold up the stop.
  const force = setTimeout(() => {
    server.closeAllConnections();
  }, 5000);
  await closed;
  clearTimeout(force);
}

/** The first signal stops in order, the second at once. */
function onStopSignal(stopInOrder: Stop): void {
  let isStopping = false;
  const stop = () => {
    if (isStopping) process.exit(1);
    isStopping = true;
    void stopInOrder().then(() => process.exit(0));
  };
  process.on('SIGINT', stop);
  process.on('SIGTERM', stop);
}

main().catch((error: unknown) => {
  // A failed statement's own message holds the values bound to it.
  const told = error instanceof DrizzleQueryError ? error.cause : error;
  process.stderr.write(`${told instanceof Error ? told.message : String(told)}\n`);
  process.exit(1);
});
