import type { Express } from 'express';

/** Serves the client from its sources with live reload, by Vite inside this server. */
export async function developmentClient(
  stops: (() => Promise<void>)[],
): Promise<(app: Express) => void> {
  const { createServer } = await import('vite');
  const vite = await createServer({ server: { middlewareMode: true }, appType: 'spa' });
  stops.push(() => vite.close());
  return (app) => app.use(vite.middlewares);
}
