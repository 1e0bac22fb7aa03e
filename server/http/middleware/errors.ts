import type { ErrorRequestHandler, RequestHandler } from 'express';
import { hasCode, isLostConnection, isStorageFull } from '../../db/faults.ts';
import { ApiError, notFound, problemOf } from '../../errors.ts';
import type { Logger } from '../../log.ts';
import { requestIdOf } from './request-id.ts';

/** Answers every call that no route took. */
export const unknownCall: RequestHandler = (req) => {
  throw notFound(`The call ${req.method} ${req.baseUrl}${req.path}`);
};

/** The one place where errors become answers: ours are told, unknown ones logged and hidden. */
export function answerErrors(log: Logger): ErrorRequestHandler {
  return (error: unknown, _req, res, next) => {
    const known = asApiError(error);
    const id = requestIdOf(res);
    if (known.status >= 500) log.error({ err: error, requestId: id }, 'request failed');
    if (res.headersSent) {
      next(error);
      return;
    }
    if (known.more.retryAfterSeconds !== undefined)
      res.setHeader('Retry-After', String(known.more.retryAfterSeconds));
    res.status(known.status).type('application/problem+json').send(problemOf(known, id));
  };
}

function asApiError(error: unknown): ApiError {
  if (error instanceof ApiError) return error;
  if (isDatabaseAway(error))
    return new ApiError('unavailable', 'The database cannot be reached. Try again in a moment.');
  if (isStorageFull(error))
    return new ApiError(
      'storage-full',
      'The disk of the database is full. Nothing was kept. Tell your administrator, and try again once there is room.',
    );
  if (isUnkeepable(error))
    return new ApiError(
      'invalid-input',
      'A value holds a character or a date that cannot be kept. Nothing was changed.',
    );
  return (
    unreadable(error) ??
    new ApiError(
      'internal-error',
      'Something went wrong on the server. Nothing half-done was kept. The log has the details under this request id.',
    )
  );
}

/** Requests that Express or its readers refused, which they tell by a status below 500. */
function unreadable(error: unknown): ApiError | null {
  const { status, type } = traitsOf(error);
  if (status === undefined || status < 400 || status >= 500) return null;
  if (status === 404) return notFound('The file');
  if (status === 413)
    return new ApiError('too-large', 'The body is too large. Nothing was changed.');
  if (status === 415)
    return new ApiError('wrong-media-type', 'The encoding of the body is not supported.');
  if (type === 'entity.parse.failed')
    return new ApiError('invalid-input', 'The body is not JSON. Nothing was changed.');
  return new ApiError('invalid-input', 'The request could not be read. Nothing was changed.');
}

function traitsOf(error: unknown): { type?: string; status?: number } {
  if (typeof error !== 'object' || error === null) return {};
  const { type, status } = error as { type?: unknown; status?: unknown };
  return {
    ...(typeof type === 'string' ? { type } : {}),
    ...(typeof status === 'number' ? { status } : {}),
  };
}

/** It went away, or has no connection left (SQLSTATE of too many). */
const isDatabaseAway = (error: unknown): boolean =>
  isLostConnection(error) || hasCode(error, ['53300']);

/** SQLSTATE of characters (NUL) and moments that PostgreSQL cannot hold: they came with the request. */
const isUnkeepable = (error: unknown): boolean =>
  hasCode(error, ['22007', '22008', '22021', '22P05']);
