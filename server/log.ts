import { pino, type Logger } from 'pino';

export type { Logger };

/** The server's log, as lines of JSON; secrets never reach it. */
export function createLog(level: string): Logger {
  return pino({
    level,
    redact: {
      paths: ['req.headers.cookie', 'req.headers.authorization', 'res.headers["set-cookie"]'],
      censor: '(left out)',
    },
  });
}
