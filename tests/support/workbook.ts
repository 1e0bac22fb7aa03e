import { openFile, type FileWishes } from '../../server/intake/open-file.ts';
import { cellsOf, rawOf } from '../../server/intake/sample.ts';
import { zipOf, type ZipOptions } from './zip.ts';

const main = 'http://schemas.openxmlformats.org/spreadsheetml/2006/main';
const relations = 'http://schemas.openxmlformats.org/officeDocument/2006/relationships';
const packageRelations = 'http://schemas.openxmlformats.org/package/2006/relationships';
const prolog = '<?xml version="1.0" encoding="UTF-8" standalone="yes"?>';

export interface HandMadeWorkbook {
  /** The rows of each sheet as XML, by name. */
  sheets: Record<string, string>;
  /** What stands in `workbookPr`. */
  properties?: string;
  /** The items of the shared texts as XML. */
  strings?: string;
  /** Number formats of the styles 0, 1, …: a known number, or a code. */
  formats?: (number | string)[];
  zip?: ZipOptions;
  /** Parts that are added, or that replace others. */
  parts?: Record<string, string>;
}

/** A workbook of the fewest parts that ECMA-376 asks for, made by hand. */
export function workbookOf(made: HandMadeWorkbook): Buffer {
  return zipOf({ ...partsOf(made), ...made.parts }, made.zip);
}

function partsOf({ sheets, properties = '', strings = '', formats = [0] }: HandMadeWorkbook) {
  const names = Object.keys(sheets);
  const listed = names.map(
    (name, index) => `<sheet name="${name}" sheetId="${index + 1}" r:id="rId${index + 1}"/>`,
  );
  const related = names.map(
    (_, index) =>
      `<Relationship Id="rId${index + 1}" Type="${relations}/worksheet" Target="worksheets/sheet${index + 1}.xml"/>`,
  );
  return {
    '[Content_Types].xml': `${prolog}<Types xmlns="http://schemas.openxmlformats.org/package/2006/content-types"/>`,
    'xl/workbook.xml': `${prolog}<workbook xmlns="${main}" xmlns:r="${relations}"><workbookPr ${properties}/><sheets>${listed.join('')}</sheets></workbook>`,
    'xl/_rels/workbook.xml.rels': `${prolog}<Relationships xmlns="${packageRelations}">${related.join('')}</Relationships>`,
    ...Object.fromEntries(
      Object.values(sheets).map((rows, index) => [
        `xl/worksheets/sheet${index + 1}.xml`,
        `${prolog}<worksheet xmlns="${main}"><sheetData>${rows}</sheetData></worksheet>`,
      ]),
    ),
    'xl/styles.xml': `${prolog}<styleSheet xmlns="${main}">${stylesOf(formats)}</styleSheet>`,
    'xl/sharedStrings.xml': `${prolog}<sst xmlns="${main}">${strings}</sst>`,
  };
}

function stylesOf(formats: readonly (number | string)[]): string {
  const codes = formats.flatMap((format, index) =>
    typeof format === 'string'
      ? [`<numFmt numFmtId="${200 + index}" formatCode="${escapeXml(format)}"/>`]
      : [],
  );
  const styles = formats.map(
    (format, index) => `<xf numFmtId="${typeof format === 'string' ? 200 + index : format}"/>`,
  );
  return `<numFmts>${codes.join('')}</numFmts><cellXfs>${styles.join('')}</cellXfs>`;
}

export const escapeXml = (text: string): string =>
  text
    .replaceAll('&', '&amp;')
    .replaceAll('<', '&lt;')
    .replaceAll('"', '&quot;')
    .replace(/[\r\n\t]/g, (character) => `&#${character.charCodeAt(0)};`);

/** Opens bytes as a file, handed on in blocks of one size. */
export function opened(bytes: Buffer, wishes: FileWishes = {}, blockBytes = 65_536) {
  const open = async function* () {
    await Promise.resolve();
    for (let at = 0; at < bytes.length; at += blockBytes) {
      yield Buffer.from(bytes.subarray(at, at + blockBytes));
    }
  };
  return openFile(open, wishes);
}

/** All rows of a file as text. */
export async function rowsOf(
  bytes: Buffer,
  wishes: FileWishes = {},
  header: readonly string[] = [],
  blockBytes?: number,
) {
  const file = await opened(bytes, wishes, blockBytes);
  const rows: { line: number; cells: string[]; raw: string }[] = [];
  const read = file.rows({ delimiter: null, header }, (row) => {
    rows.push({ line: row.line, cells: cellsOf(row), raw: rawOf(row) });
  });
  for await (const _ of read);
  return rows;
}
