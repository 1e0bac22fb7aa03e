import { format } from 'date-fns';
import { IntakeFailure } from '../failure.ts';

/** A step of a compiled pattern: a field of the date, or bytes that must stand there. */
export type PatternStep =
  | { field: 'year' | 'month' | 'day' | 'hour' | 'minute' | 'second'; least: number; most: number }
  | { field: 'short-year' | 'half-hour' | 'fraction' | 'half-of-day' | 'offset' }
  | { field: 'literal'; bytes: Buffer };

/** The tokens of date-fns that are read by steps; a pattern with any other is left to date-fns. */
const steps: Readonly<Record<string, PatternStep>> = {
  yyyy: { field: 'year', least: 4, most: 4 },
  yy: { field: 'short-year' },
  MM: { field: 'month', least: 1, most: 2 },
  M: { field: 'month', least: 1, most: 2 },
  dd: { field: 'day', least: 1, most: 2 },
  d: { field: 'day', least: 1, most: 2 },
  HH: { field: 'hour', least: 1, most: 2 },
  H: { field: 'hour', least: 1, most: 2 },
  hh: { field: 'half-hour' },
  h: { field: 'half-hour' },
  mm: { field: 'minute', least: 1, most: 2 },
  m: { field: 'minute', least: 1, most: 2 },
  ss: { field: 'second', least: 1, most: 2 },
  s: { field: 'second', least: 1, most: 2 },
  a: { field: 'half-of-day' },
  aa: { field: 'half-of-day' },
  X: { field: 'offset' },
  XX: { field: 'offset' },
  XXX: { field: 'offset' },
  x: { field: 'offset' },
  xx: { field: 'offset' },
  xxx: { field: 'offset' },
};

/** A quoted literal, a run of one letter, or anything else. */
const token = /'(?:[^']|'')*'|([A-Za-z])\1*|[^A-Za-z']+/g;

export interface TimePattern {
  pattern: string;
  /** null where the pattern holds tokens that only date-fns reads. */
  steps: readonly PatternStep[] | null;
  /** Whether times in it say their offset from UTC, so that no zone is needed to read them. */
  hasOffset: boolean;
}

/**
 * Compiles a date-fns pattern (Unicode Technical Standard 35, as date-fns reads it).
 *
 * @throws IntakeFailure where it is none, or does not say the year, month and day of a time
 */
export function compileTimePattern(pattern: string): TimePattern {
  const tokens = pattern.match(token) ?? [];
  if (tokens.join('') !== pattern) throw noPattern(pattern, 'a quotation mark is not closed');
  const letters = tokens.filter((each) => /^[A-Za-z]/.test(each));
  refuseWrongTokens(pattern, letters);
  const saysMoment = letters.some((each) => each.startsWith('t') || each.startsWith('T'));
  if (!saysMoment && !saysDay(letters)) {
    throw noPattern(pattern, 'it does not say year, month and day');
  }
  return {
    pattern,
    steps: compileSteps(tokens),
    hasOffset: saysMoment || letters.some((each) => /^[XxOz]/.test(each)),
  };
}

function saysDay(letters: readonly string[]): boolean {
  const says = (initials: string): boolean =>
    letters.some((each) => initials.includes(each.charAt(0)));
  return (says('yu') && says('ML') && says('d')) || (says('R') && says('I') && says('i'));
}

function refuseWrongTokens(pattern: string, letters: readonly string[]): void {
  if (letters.some((each) => /^(?:YY|YYYY|DD?)$/.test(each))) {
    throw noPattern(pattern, 'years are written yyyy and days dd, in small letters');
  }
  try {
    format(new Date(0), pattern);
  } catch {
    throw noPattern(pattern, 'it holds letters that stand for nothing; text belongs in quotes');
  }
}

function compileSteps(tokens: readonly string[]): PatternStep[] | null {
  const compiled = tokens.map(compileStep);
  return compiled.every((step) => step !== null) ? compiled : null;
}

function compileStep(text: string): PatternStep | null {
  if (/^S+$/.test(text)) return { field: 'fraction' };
  if (/^[A-Za-z]/.test(text)) return steps[text] ?? null;
  const literal = text.startsWith("'")
    ? text === "''"
      ? "'"
      : text.slice(1, -1).replaceAll("''", "'")
    : text;
  return { field: 'literal', bytes: Buffer.from(literal) };
}

function noPattern(pattern: string, why: string): IntakeFailure {
  return new IntakeFailure(
    'time-format-unknown',
    `The time format “${pattern}” cannot be used: ${why}.`,
    'Write it like yyyy-MM-dd HH:mm:ss, or leave it at auto.',
  );
}
