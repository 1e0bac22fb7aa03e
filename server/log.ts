import { pino, type Logger } from 'pino';

export type { Logger };

/** What of an error is logged. Drivers hang whole connections, secrets included, on theirs. */
export function plainError(error: unknown): unknown {
  if (!(error instanceof Error)) return error;
  return {
    name: error.name,
    message: error.message,
    ...('code' in error ? { code: error.code } : {}),
    stack: error.stack,
    ...(error.cause === undefined ? {} : { cause: plainError(error.cause) }),
  };
}

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
