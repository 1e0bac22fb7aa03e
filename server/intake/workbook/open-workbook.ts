import { ZipReader } from '../archive/read-zip.ts';
import type { FileWishes, Head } from '../open-file.ts';
import type { OnRow, OpenedFile, Opener, RowsWanted } from '../opened-file.ts';
import { XmlReader } from '../xml/xml-reader.ts';
import { chooseSheet } from './choose-sheet.ts';
import { SheetRows } from './sheet-rows.ts';
import { brokenWorkbook, partSubject } from './workbook-failure.ts';
import { readWorkbookParts, type SheetPlace, type WorkbookParts } from './workbook-parts.ts';

/**
 * An XLSX workbook (ECMA-376): one sheet of it is read, the one that is wished for, else the first that has
 * rows below a header. The archive is read from front to back each time: once for the texts and styles, once
 * for the beginning of the sheet, and once for its rows.
 *
 * @throws IntakeFailure where it is broken, protected, no workbook at all, or has no such sheet
 */
export async function openWorkbook(
  open: Opener,
  _head: Head,
  wishes: FileWishes,
): Promise<OpenedFile> {
  const parts = await readWorkbookParts(open);
  const { sheet, rows } = await chooseSheet(open, parts, wishes.sheet);
  return {
    kind: 'workbook',
    settled: { sheet: sheet.name },
    sheets: parts.sheets.map(({ name }) => name),
    dateSystem: parts.dateSystem,
    headerLine: null,
    cuts: [{ delimiter: null, rows }],
    rows: (wanted, onRow) => readRows(open, parts, sheet, wanted, onRow),
  };
}

async function* readRows(
  open: Opener,
  parts: WorkbookParts,
  { name, part }: SheetPlace,
  wanted: RowsWanted,
  onRow: OnRow,
): AsyncGenerator<number> {
  const zip = new ZipReader(open());
  for await (const entry of zip.entries()) {
    if (entry.name.toLowerCase() !== part) continue;
    let goesOn = true;
    const handler = new SheetRows(parts, wanted, (row) => (goesOn = onRow(row) !== false));
    const reader = new XmlReader(handler, partSubject(entry.name));
    for await (const block of entry.blocks()) {
      reader.write(block);
      if (!goesOn) return;
      yield zip.taken;
    }
    reader.end();
    await zip.drain();
    yield zip.taken;
    return;
  }
  throw brokenWorkbook(`The workbook does not hold the cells of its sheet “${name}”.`);
}
