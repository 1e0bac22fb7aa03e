import { ZipReader, type ZipEntry } from '../archive/read-zip.ts';
import { IntakeFailure } from '../failure.ts';
import type { Opener } from '../opened-file.ts';
import { holdsAnything, sampleRow, sampleRowLimit, type SampleRow } from '../sample.ts';
import { XmlReader } from '../xml/xml-reader.ts';
import { SheetRows } from './sheet-rows.ts';
import { brokenWorkbook, partSubject } from './workbook-failure.ts';
import type { SheetPlace, WorkbookParts } from './workbook-parts.ts';

/** A sheet with its first rows that hold anything. */
export interface ChosenSheet {
  sheet: SheetPlace;
  rows: SampleRow[];
}

/**
 * The sheet that is wished for, else the first with rows below a header, else the first of all.
 *
 * @throws IntakeFailure where the workbook has no such sheet
 */
export async function chooseSheet(
  open: Opener,
  parts: WorkbookParts,
  wish: string | undefined,
): Promise<ChosenSheet> {
  const wanted = wish === undefined ? parts.sheets : [sheetNamed(wish, parts.sheets)];
  const left = new Set(wanted.map(({ part }) => part));
  let best: ChosenSheet | null = null;
  for await (const entry of new ZipReader(open()).entries()) {
    const part = entry.name.toLowerCase();
    const sheet = wanted.find((each) => each.part === part);
    if (!sheet || !left.delete(part)) continue;
    const chosen = { sheet, rows: await firstRows(entry, parts) };
    if (best === null || isBetter(chosen, best, wanted)) best = chosen;
    if (hasRows(best) && wanted.slice(0, wanted.indexOf(best.sheet)).every(isSeen(left))) break;
  }
  if (best === null) throw brokenWorkbook('The workbook does not hold the cells of its sheets.');
  return best;
}

const isSeen = (left: ReadonlySet<string>) => (sheet: SheetPlace) => !left.has(sheet.part);

const hasRows = ({ rows }: ChosenSheet): boolean => rows.length > 1;

/** Sheets need not lie in the archive in the order that the workbook shows. */
function isBetter(one: ChosenSheet, other: ChosenSheet, order: readonly SheetPlace[]): boolean {
  if (hasRows(one) !== hasRows(other)) return hasRows(one);
  return order.indexOf(one.sheet) < order.indexOf(other.sheet);
}

async function firstRows(entry: ZipEntry, parts: WorkbookParts): Promise<SampleRow[]> {
  const rows: SampleRow[] = [];
  const handler = new SheetRows(parts, { delimiter: null, header: [] }, (row) => {
    const sample = sampleRow(row);
    if (holdsAnything(sample)) rows.push(sample);
    return rows.length <= sampleRowLimit;
  });
  const reader = new XmlReader(handler, partSubject(entry.name));
  for await (const block of entry.blocks()) {
    reader.write(block);
    if (reader.isDone) return rows;
  }
  reader.end();
  return rows;
}

function sheetNamed(wish: string, sheets: readonly SheetPlace[]): SheetPlace {
  const fold = (name: string): string => name.normalize('NFC').trim().toLowerCase();
  const found =
    sheets.find(({ name }) => name === wish) ??
    sheets.find(({ name }) => fold(name) === fold(wish));
  if (found) return found;
  const shown = sheets.slice(0, 12).map(({ name }) => `“${name.slice(0, 40)}”`);
  const more = sheets.length > shown.length ? ` and ${sheets.length - shown.length} more` : '';
  throw new IntakeFailure(
    'no-such-sheet',
    `The workbook has no sheet “${wish}”.`,
    `Its sheets are ${shown.join(', ')}${more}. Choose among them.`,
  );
}
