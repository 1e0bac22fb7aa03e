import { IntakeFailure } from '../failure.ts';

const remedy = 'Export it again, or save it as XLSX or CSV, and upload that.';

/** An archive that ends too soon. */
export const brokenOff = (): IntakeFailure =>
  new IntakeFailure('broken-file', 'The archive breaks off before its end.', remedy);

/** An archive, or one of its entries, whose bytes are not those that were packed. */
export const damaged = (name?: string): IntakeFailure =>
  new IntakeFailure(
    'broken-file',
    name === undefined
      ? 'The archive is damaged.'
      : `The part “${name}” of the archive is damaged.`,
    remedy,
  );

export const protectedArchive = (): IntakeFailure =>
  new IntakeFailure(
    'protected-file',
    'The archive is protected by a password.',
    'Take the password away, or export the log without one, and upload that.',
  );

/** An entry that is packed in a way that cannot be read from front to back. */
export const unknownPacking = (name: string): IntakeFailure =>
  new IntakeFailure(
    'wrong-kind',
    `The part “${name}” of the archive is packed in a way that is not read.`,
    'Open it in the program that it was made for, save it again as XLSX or CSV, and upload that.',
  );
