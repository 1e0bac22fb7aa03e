import { DrizzleQueryError } from 'drizzle-orm';

/** Whether a statement failed on this constraint. */
export function breaks(error: unknown, constraint: string): boolean {
  const cause = error instanceof DrizzleQueryError ? error.cause : error;
  return cause instanceof Error && 'constraint' in cause && cause.constraint === constraint;
}
