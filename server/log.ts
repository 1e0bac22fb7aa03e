import { DrizzleQueryError } from 'drizzle-orm';
import { pino, type Logger } from 'pino';

export type { Logger };

/**
 * What of an error is logged, with its causes. Drivers hang whole connections, secrets included, on theirs;
 * the message of a failed statement holds the values bound to it, which may be secret or a plant's own.
 */
export function plainError(error: unknown): unknown {
  if (!(error instanceof Error)) return error;
  const isStatement = error instanceof DrizzleQueryError;
  return {
    name: error.name,
    message: isStatement ? 'A statement failed.' : error.message,
    ...(isStatement ? { query: error.query } : {}),
    ...('code' in error ? { code: error.code } : {}),
    ...('constraint' in error ? { constraint: error.constraint } : {}),
    stack: framesOf(error),
    ...(error instanceof AggregateError ? { errors: error.errors.map(plainError) } : {}),
    ...(error.cause === undefined ? {} : { cause: plainError(error.cause) }),
  };
}

/** A stack begins with the message; only where it happened is wanted of it. */
const framesOf = (error: Error): string =>
  (error.stack ?? '')
    .split('\n')
    .filter((line) => /^\s+at /.test(line))
    .join('\n');

/** The server's log, as lines of JSON; secrets never reach it. */
export function createLog(level: string): Logger {
  return pino({
    level,
    serializers: { err: plainError },
    redact: {
      paths: ['req.headers.cookie', 'req.headers.authorization', 'res.headers["set-cookie"]'],
      censor: '(left out)',
    },
  });
}
