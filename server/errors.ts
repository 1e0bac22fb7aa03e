import { errorKinds, type ErrorCode, type Problem } from '../shared/errors.ts';

/** An error that is meant for the caller: it becomes a problem document. */
export class ApiError extends Error {
  constructor(
    readonly code: ErrorCode,
    detail: string,
    readonly more: {
      errors?: Problem['errors'];
      retryAfterSeconds?: number;
      cause?: unknown;
    } = {},
  ) {
    super(detail, { cause: more.cause });
    this.name = 'ApiError';
  }

  get status(): number {
    return errorKinds[this.code].status;
  }
}

export const notFound = (what: string) =>
  new ApiError('not-found', `${what} was not found, or is not yours to see.`);

export const signedOut = () =>
  new ApiError('signed-out', 'You are not signed in, or your session has ended. Sign in again.');

export const notAllowed = () =>
  new ApiError('not-allowed', 'Your role in this organisation does not allow this.');

export const invalidInput = (detail: string, errors?: Problem['errors']) =>
  new ApiError('invalid-input', detail, errors ? { errors } : {});

export const conflict = (detail: string) => new ApiError('conflict', detail);

/** The problem document of an error (RFC 9457). */
export function problemOf(error: ApiError, requestId: string): Problem {
  const { status, title } = errorKinds[error.code];
  return {
    type: `urn:weirmark:error:${error.code}`,
    title,
    status,
    detail: error.message,
    code: error.code,
    requestId,
    ...(error.more.errors ? { errors: error.more.errors } : {}),
  };
}
