/** Why a whole file could not be read, by code; the sentence goes with each failure. */
export type IntakeFailureCode =
  | 'stopped'
  | 'empty-file'
  | 'header-only'
  | 'wrong-kind'
  | 'unsupported-encoding'
  | 'row-too-long'
  | 'too-many-columns'
  | 'too-many-areas'
  | 'no-such-column'
  | 'column-twice'
  | 'column-not-found'
  | 'date-order-unknown'
  | 'time-format-unknown'
  | 'original-damaged';

/**
 * A file that cannot be read, with the sentence for the person who handed it over: what was wrong and what
 * to do. Nothing of such a file is kept but the file itself.
 */
export class IntakeFailure extends Error {
  readonly code: IntakeFailureCode;
  /** The same without saying that nothing was loaded, for what is refused before any reading. */
  readonly advice: string;

  constructor(code: IntakeFailureCode, wrong: string, remedy: string) {
    super(`${wrong} Nothing was loaded. ${remedy}`);
    this.name = 'IntakeFailure';
    this.code = code;
    this.advice = `${wrong} ${remedy}`;
  }
}
