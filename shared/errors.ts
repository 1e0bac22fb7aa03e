import { z } from 'zod';

/** Every error that the API answers with: its code, status and standing title. */
export const errorKinds = {
  'invalid-input': { status: 400, title: 'The request was not understood' },
  'not-built': { status: 400, title: 'This is not available yet' },
  'signed-out': { status: 401, title: 'Sign in first' },
  'wrong-credentials': { status: 401, title: 'E-mail or password is wrong' },
  'not-allowed': { status: 403, title: 'Your role does not allow this' },
  'foreign-origin': { status: 403, title: 'The request came from another site' },
  'not-found': { status: 404, title: 'Not found' },
  'timed-out': { status: 408, title: 'The request did not go on' },
  conflict: { status: 409, title: 'This does not fit what is there' },
  'too-large': { status: 413, title: 'The request is too large' },
  'wrong-media-type': { status: 415, title: 'The request is of the wrong kind' },
  'too-many-attempts': { status: 429, title: 'Too many failed attempts' },
  'internal-error': { status: 500, title: 'Something went wrong on the server' },
  unavailable: { status: 503, title: 'The database cannot be reached' },
  'storage-full': { status: 507, title: 'The disk of the database is full' },
} as const;

export type ErrorCode = keyof typeof errorKinds;

/** A problem document (RFC 9457); `errors` names each field that was wrong. */
export const problemSchema = z.object({
  type: z.string(),
  title: z.string(),
  status: z.int(),
  detail: z.string(),
  code: z.string(),
  requestId: z.string().optional(),
  errors: z.array(z.object({ field: z.string(), message: z.string() })).optional(),
});
export type Problem = z.infer<typeof problemSchema>;
