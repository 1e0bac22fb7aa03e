import { problemSchema, type Problem } from '../../shared/errors.ts';

/** An answer of the API that is a problem, or no answer at all. */
export class ApiError extends Error {
  readonly problem: Problem;

  constructor(problem: Problem) {
    super(problem.detail);
    this.name = 'ApiError';
    this.problem = problem;
  }

  get status(): number {
    return this.problem.status;
  }
}

/** The problem in an answer's text; one of our own words where the text is none. */
export function problemOfText(status: number, text: string): Problem {
  try {
    return problemSchema.parse(JSON.parse(text));
  } catch {
    return {
      type: 'about:blank',
      title: 'The server gave no usable answer',
      status,
      detail: `The server answered with status ${status} and no explanation. Try again in a moment.`,
      code: 'internal-error',
    };
  }
}

export const unreachable: Problem = {
  type: 'about:blank',
  title: 'The server cannot be reached',
  status: 0,
  detail:
    'There was no answer. What you see is what came last; check the connection and try again.',
  code: 'unavailable',
};
