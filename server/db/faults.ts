/**
 * Whether an error, or one that caused it, says that the database went away: SQLSTATE classes 08
 * (connection) and 57P (shut down), sockets that were refused or broke, and what the driver says of them.
 */
export function isLostConnection(error: unknown): boolean {
  for (const each of causesOf(error)) {
    if (/^(08|57P|ECONNREFUSED|ECONNRESET|ETIMEDOUT|EPIPE)/.test(codeOf(each) ?? '')) return true;
    if (each instanceof Error && lossSentences.test(each.message)) return true;
  }
  return false;
}

const lossSentences =
  /Connection terminated|Client has encountered a connection error|timeout exceeded when trying to connect/;

/** Whether the database has no room: SQLSTATE of a full disk, and of a limit set for its temporary files. */
export const isStorageFull = (error: unknown): boolean => hasCode(error, ['53100', '53400']);

/** Whether an error, or one that caused it, bears one of these SQLSTATEs. */
export const hasCode = (error: unknown, codes: readonly string[]): boolean =>
  [...causesOf(error)].some((each) => codes.includes(codeOf(each) ?? ''));

function* causesOf(error: unknown): Generator {
  for (let each = error; each !== undefined && each !== null;) {
    yield each;
    each = each instanceof Error ? each.cause : undefined;
  }
}

const codeOf = (error: unknown): string | undefined =>
  error instanceof Error && 'code' in error && typeof error.code === 'string'
    ? error.code
    : undefined;
