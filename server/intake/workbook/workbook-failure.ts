import { IntakeFailure } from '../failure.ts';
import { sheetCellLimit } from '../limits.ts';
import type { XmlSubject } from '../xml/xml-reader.ts';

export const saveAgain =
  'Open the workbook in a spreadsheet program, save it again as XLSX, and upload that.';

/** How a part of a workbook is called in a sentence. */
export const partSubject = (part: string): XmlSubject => ({
  name: `The part “${part}” of the workbook`,
  remedy: saveAgain,
});

/** A workbook whose parts do not belong together. */
export const brokenWorkbook = (wrong: string): IntakeFailure =>
  new IntakeFailure('broken-file', wrong, saveAgain);

/** @param where the cell or text, at the beginning of a sentence */
export const cellTooLong = (where: string): IntakeFailure =>
  new IntakeFailure(
    'cell-too-long',
    `${where} has more than ${sheetCellLimit.toLocaleString('en')} characters, the most that a sheet holds.`,
    'Leave long texts out of the export.',
  );
