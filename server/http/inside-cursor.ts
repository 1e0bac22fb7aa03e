import { z } from 'zod';
import { invalidInput } from '../errors.ts';
import type { InsidePlace, InsideRow } from '../flow/inside-at.ts';

const placeSchema = z.tuple([
  z.string().regex(/^-?\d{4,6}-\d\d-\d\d \d\d:\d\d:\d\d(\.\d+)?[+-]\d\d(:\d\d)*$/),
  z.string().max(500),
  z.int(),
]);

/** A place in the list of those inside, as an opaque word for the next page. */
export const cursorOfPlace = (row: InsideRow): string =>
  Buffer.from(JSON.stringify([row.entered_at, row.job_key, row.ordinal])).toString('base64url');

/** @throws ApiError invalid-input for a word that is none of ours */
export function placeOfCursor(cursor: string | undefined): InsidePlace | null {
  if (cursor === undefined) return null;
  try {
    const text = Buffer.from(cursor, 'base64url').toString('utf8');
    const [enteredAt, jobKey, ordinal] = placeSchema.parse(JSON.parse(text));
    return { enteredAt, jobKey, ordinal };
  } catch {
    throw invalidInput('The cursor is not one that an earlier page gave.', [
      { field: 'cursor', message: 'Leave it out to begin with the first page.' },
    ]);
  }
}
