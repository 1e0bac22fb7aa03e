import { randomUUID } from 'node:crypto';
import type { RequestHandler, Response } from 'express';

/** Gives each request an id of our own: in the log, in problem documents, in the answer's header. */
export const requestId: RequestHandler = (_req, res, next) => {
  const id = randomUUID();
  (res.locals as { requestId?: string }).requestId = id;
  res.setHeader('X-Request-Id', id);
  next();
};

export const requestIdOf = (res: Response): string =>
  (res.locals as { requestId?: string }).requestId ?? 'unknown';
