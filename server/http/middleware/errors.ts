import type { ErrorRequestHandler, RequestHandler } from 'express';
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
  const chain = [...causesOf(error)];
  if (chain.some(isDatabaseAway))
    return new ApiError('unavailable', 'The database cannot be reached. Try again in a moment.');
  if (chain.some(isUnkeepable))
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

function* causesOf(error: unknown): Generator {
  for (let each = error; each !== undefined && each !== null;) {
    yield each;
    each = each instanceof Error ? each.cause : undefined;
  }
}

function traitsOf(error: unknown): { type?: string; code?: string; status?: number } {
  if (typeof error !== 'object' || error === null) return {};
  const { type, code, status } = error as { type?: unknown; code?: unknown; status?: unknown };
  return {
    ...(typeof type === 'string' ? { type } : {}),
    ...(typeof code === 'string' ? { code } : {}),
    ...(typeof status === 'number' ? { status } : {}),
  };
}

/** SQLSTATE classes 08 and 57P, too many connections, and sockets that were refused or broke. */
function isDatabaseAway(error: unknown): boolean {
  const { code } = traitsOf(error);
  if (code !== undefined && /^(08|57P|53300|ECONNREFUSED|ECONNRESET|EPIPE)/.test(code)) return true;
  return (
    error instanceof Error &&
    /Connection terminated|timeout exceeded when trying to connect/.test(error.message)
  );
}

/** SQLSTATE of characters (NUL) and moments that PostgreSQL cannot hold: they came with the request. */
function isUnkeepable(error: unknown): boolean {
  return ['22007', '22008', '22021', '22P05'].includes(traitsOf(error).code ?? '');
}
