import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import express, { type Express } from 'express';
import { pinoHttp } from 'pino-http';
import type { Dependencies } from './dependencies.ts';
import { plainError } from './log.ts';
import { createApi } from './http/api.ts';
import { answerErrors, unknownCall } from './http/middleware/errors.ts';
import { requestId, requestIdOf } from './http/middleware/request-id.ts';
import { securityHeaders } from './http/middleware/security-headers.ts';
import { registerAccessKeys } from './http/routes/access-keys.ts';
import { registerAreas } from './http/routes/areas.ts';
import { registerAuth } from './http/routes/auth.ts';
import { registerColumnPlans } from './http/routes/column-plans.ts';
import { registerFigures } from './http/routes/figures.ts';
import { registerDemo } from './http/routes/demo.ts';
import { registerJobs } from './http/routes/jobs.ts';
import { registerServer } from './http/routes/server.ts';
import { registerSetUp } from './http/routes/set-up.ts';
import { registerSites } from './http/routes/sites.ts';
import { registerTrust } from './http/routes/trust.ts';
import { registerUploads } from './http/routes/uploads.ts';
import { registerZones } from './http/routes/zones.ts';

/**
 * The application without a listening socket, so that tests can drive it.
 *
 * @param client adds what serves the client after the API; left out where only the API is wanted
 */
export function buildApp(deps: Dependencies, client?: (app: Express) => void): Express {
  const app = express();
  app.disable('x-powered-by');
  app.set('trust proxy', deps.env.WEIRMARK_TRUST_PROXY);
  app.use(requestId);
  app.use(
    pinoHttp({
      logger: deps.log,
      wrapSerializers: false,
      serializers: {
        req: (req: express.Request) => ({ method: req.method, url: req.originalUrl }),
        res: (res: express.Response) => ({ status: res.statusCode }),
        err: plainError,
      },
      genReqId: (_req, res) => requestIdOf(res as express.Response),
      autoLogging: { ignore: (req) => !req.url?.startsWith('/api/') },
      customLogLevel: (_req, res, error) =>
        error !== undefined || res.statusCode >= 500 ? 'error' : 'debug',
    }),
  );
  app.use(securityHeaders(deps.env.WEIRMARK_DEV));
  app.use('/api', (_req, res, next) => {
    res.setHeader('Cache-Control', 'no-store');
    next();
  });
  const router = express.Router();
  const api = createApi(router, deps);
  registerServer(api);
  registerAuth(api);
  registerSites(api);
  registerUploads(api);
  registerColumnPlans(api);
  registerZones(api);
  registerFigures(api);
  registerTrust(api);
  registerJobs(api);
  registerDemo(api);
  registerSetUp(api);
  registerAreas(api);
  registerAccessKeys(api);
  app.use(router);
  app.use('/api', unknownCall);
  serveSample(app);
  client?.(app);
  app.use(answerErrors(deps.log));
  return app;
}

/** Serves the built client: hashed assets for good, every other address its one page. */
export function serveClient(folder: string): (app: Express) => void {
  return (app) => {
    const page = readFileSync(`${folder}/index.html`, 'utf8');
    app.use(
      '/assets',
      express.static(`${folder}/assets`, { immutable: true, maxAge: '1y', fallthrough: false }),
    );
    app.use(express.static(folder, { index: false, maxAge: 0 }));
    app.get('/{*path}', (_req, res) => {
      res.setHeader('Cache-Control', 'no-cache');
      res.type('html').send(page);
    });
  };
}

const sampleFile = fileURLToPath(new URL('../samples/depot-two-weeks.csv', import.meta.url));

/** A small export to try the product with; it is invented, and open to everybody. */
function serveSample(app: Express): void {
  app.get('/samples/depot-two-weeks.csv', (_req, res) => {
    res.type('text/csv').attachment('depot-two-weeks.csv').sendFile(sampleFile);
  });
}
