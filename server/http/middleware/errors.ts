import type { ErrorRequestHandler, RequestHandler } from 'express';
import { ApiError, notFound, problemOf } from '../../errors.ts';
import type { Logger } from '../../log.ts';
import { requestIdOf } from './request-id.ts';

/** Answers every call that no route took. */
export const unknownCall: RequestHandler = (req) => {
  throw notFound(`The call ${req.method} ${req.path}`);
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
  const { type, code } = traitsOf(error);
  if (type === 'entity.parse.failed')
    return new ApiError('invalid-input', 'The body is not JSON. Nothing was changed.');
  if (type === 'entity.too.large')
    return new ApiError('too-large', 'The body is too large. Nothing was changed.');
  if (type?.startsWith('encoding.') || type?.startsWith('charset.'))
    return new ApiError('wrong-media-type', 'The encoding of the body is not supported.');
  if (isDatabaseAway(error, code))
    return new ApiError('unavailable', 'The database cannot be reached. Try again in a moment.');
  return new ApiError(
    'internal-error',
    'Something went wrong on the server. Nothing half-done was kept. The log has the details under this request id.',
  );
}

function traitsOf(error: unknown): { type?: string; code?: string } {
  if (typeof error !== 'object' || error === null) return {};
  const { type, code } = error as { type?: unknown; code?: unknown };
  return {
    ...(typeof type === 'string' ? { type } : {}),
    ...(typeof code === 'string' ? { code } : {}),
  };
}

/** SQLSTATE classes 08 and 57P, and sockets that were refused or broke, however deep. */
function isDatabaseAway(error: unknown, code: string | undefined): boolean {
  if (code !== undefined && /^(08|57P|ECONNREFUSED|ECONNRESET|EPIPE)/.test(code)) return true;
  if (!(error instanceof Error)) return false;
  if (/Connection terminated|timeout exceeded when trying to connect/.test(error.message))
    return true;
  return error.cause !== undefined && isDatabaseAway(error.cause, traitsOf(error.cause).code);
}
