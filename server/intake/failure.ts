/** Why a whole file could not be read, by code; the sentence goes with each failure. */
export type IntakeFailureCode =
  | 'stopped'
  | 'internal-error'
  | 'storage-full'
  | 'empty-file'
  | 'header-only'
  | 'wrong-kind'
  | 'unsupported-encoding'
  | 'broken-file'
  | 'protected-file'
  | 'unsafe-xml'
  | 'unpacks-too-large'
  | 'no-such-sheet'
  | 'cell-too-long'
  | 'row-too-long'
  | 'too-many-rows'
  | 'too-many-columns'
  | 'too-many-areas'
  | 'no-such-column'
  | 'column-twice'
  | 'column-not-found'
  | 'date-order-unknown'
  | 'time-format-unknown';

/**
 * A file that cannot be read, with the sentences for the person who handed it over: what was wrong, that
 * nothing was kept, and what to do.
 */
export class IntakeFailure extends Error {
  readonly code: IntakeFailureCode;
  /** What was wrong and what to do, for what is refused before anything was read. */
  readonly advice: string;

  constructor(code: IntakeFailureCode, wrong: string, remedy?: string) {
    super(remedy === undefined ? wrong : `${wrong} Nothing of it was kept. ${remedy}`);
    this.name = 'IntakeFailure';
    this.code = code;
    this.advice = remedy === undefined ? wrong : `${wrong} ${remedy}`;
  }
}

/** The failure of an upload that a person stopped. */
export const stopped = (): IntakeFailure =>
  new IntakeFailure('stopped', 'The upload was stopped. Nothing of it was kept.');
