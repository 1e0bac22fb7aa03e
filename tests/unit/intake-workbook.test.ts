import ExcelJS from 'exceljs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { detect } from '../../server/intake/detect/detect.ts';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { columnOf } from '../../server/intake/workbook/cell-place.ts';
import { isDateFormat } from '../../server/intake/workbook/date-format.ts';
import { numberText } from '../../server/intake/workbook/number-text.ts';
import { SerialText } from '../../server/intake/workbook/serial-text.ts';
import { readText } from '../support/read-text.ts';
import { escapeXml, opened, rowsOf, workbookOf } from '../support/workbook.ts';
import { zipOf, type ZipOptions } from '../support/zip.ts';

const header = ['job', 'area', 'start', 'finish'];
const text = (cell: string) => `<c t="inlineStr"><is><t>${escapeXml(cell)}</t></is></c>`;
const row = (...cells: string[]) => `<row>${cells.join('')}</row>`;
const headerRow = row(...header.map(text));

/** Writes rows by exceljs, an independent writer. */
async function written(rows: ExcelJS.CellValue[][], numFmt = 'yyyy-mm-dd hh:mm:ss') {
  const workbook = new ExcelJS.Workbook();
  const sheet = workbook.addWorksheet('Log');
  for (const values of rows) {
    sheet.addRow(values).eachCell((cell) => {
      if (cell.value instanceof Date) cell.numFmt = numFmt;
    });
  }
  return Buffer.from(await workbook.xlsx.writeBuffer());
}

const failureOf = async (bytes: Buffer, sheet?: string) => {
  try {
    await rowsOf(bytes, sheet === undefined ? {} : { sheet });
  } catch (error) {
    if (error instanceof IntakeFailure) return error;
    throw error;
  }
  throw new Error('It was read.');
};

/** What a cell that exceljs wrote has to read as. */
function asText(value: ExcelJS.CellValue): string {
  if (value instanceof Date) return value.toISOString().slice(0, 19);
  if (typeof value === 'boolean') return value ? 'TRUE' : 'FALSE';
  return typeof value === 'string' ? value : '';
}

describe('cells of a workbook', () => {
  const second = fc
    .integer({ min: Date.UTC(1950, 0, 1) / 1000, max: Date.UTC(2100, 0, 1) / 1000 })
    .map((at) => new Date(at * 1000));
  const words = fc
    .string({ unit: 'grapheme', maxLength: 20 })
    .filter((each) => !/_x[0-9a-f]{4}_|\r|\p{Cc}|\p{Cn}|\p{Cs}|\uFFFE|\uFFFF/iu.test(each));
  const value = fc.oneof(
    words,
    second,
    fc.boolean(),
    fc.double({ noDefaultInfinity: true, noNaN: true }),
    fc.integer(),
    fc.constant(null),
  );

  test('that another program wrote read back the same', async () => {
    const table = fc.array(fc.array(value, { minLength: 4, maxLength: 4 }), {
      minLength: 1,
      maxLength: 12,
    });
    await fc.assert(
      fc.asyncProperty(table, fc.integer({ min: 7, max: 4000 }), async (values, blockBytes) => {
        const rows = values.map((cells, index) => [`J${index}`, ...cells]);
        const read = await rowsOf(await written(rows), {}, ['', '', '', '', ''], blockBytes);
        expect(read.map(({ line }) => line)).toEqual(rows.map((_, index) => index + 1));
        rows.forEach((cells, index) => {
          cells.forEach((cell, place) => {
            const found = read[index]?.cells[place];
            if (typeof cell === 'number') {
              expect(found).toMatch(/^-?\d+(?:\.\d+)?$/);
              expect(Number(found)).toBe(cell === 0 ? 0 : cell);
            } else expect(found).toBe(asText(cell));
          });
        });
      }),
      { numRuns: 40 },
    );
  });

  test('are those that exceljs reads: shared, rich and inline text, formulas, booleans, errors', async () => {
    const bytes = workbookOf({
      sheets: {
        Log: [
          '<row r="2"><c r="A2" t="s"><v>0</v></c><c r="B2" t="s"><v>1</v></c><c r="C2" t="inlineStr"><is><r><t>in</t></r><r><t>line</t></r></is></c></row>',
          '<row r="4"><c r="A4" t="str"><f>"a"&amp;"b"</f><v>ab</v></c><c r="B4"><f>1+1</f><v>2</v></c><c r="C4" t="b"><v>1</v></c></row>',
          '<row r="5"><c r="A5" s="1"><v>46082.34375</v></c><c r="C5" t="e"><v>#N/A</v></c></row>',
        ].join(''),
      },
      strings:
        '<si><t xml:space="preserve"> plain </t></si><si><r><t>ri</t></r><r><rPr><b/></rPr><t>ch</t></r></si>',
      formats: [0, 22],
    });
    const read = await rowsOf(bytes);
    expect(read.map(({ line, cells }) => [line, ...cells])).toEqual([
      [2, ' plain ', 'rich', 'inline'],
      [4, 'ab', '2', 'TRUE'],
      [5, '2026-03-01T08:15:00', '', '#N/A'],
    ]);
    const workbook = new ExcelJS.Workbook();
    await workbook.xlsx.load(bytes as never);
    const sheet = workbook.getWorksheet('Log');
    const cell = (place: string) => sheet?.getCell(place);
    expect([cell('A2')?.text, cell('B2')?.text]).toEqual([' plain ', 'rich']);
    expect([cell('A4')?.result, cell('B4')?.result]).toEqual(['ab', 2]);
    expect(cell('C4')?.value).toBe(true);
    expect(cell('A5')?.value).toEqual(new Date('2026-03-01T08:15:00Z'));
    expect(cell('C5')?.value).toEqual({ error: '#N/A' });
  });

  test('without readings of their characters, and with characters that XML cannot hold', async () => {
    const strings =
      '<si><t>東京</t><rPh sb="0" eb="2"><t>トウキョウ</t></rPh></si><si><t>a_x000A_b_x005F_c</t></si>';
    const sheets = { Log: '<row><c t="s"><v>0</v></c><c t="s"><v>1</v></c></row>' };
    const [read] = await rowsOf(workbookOf({ sheets, strings }));
    expect(read?.cells).toEqual(['東京', 'a\nb_c']);
    expect(read?.raw).toBe('東京,"a\nb_c"');
  });

  test('of elements with a prefix, as some writers have them, are read', async () => {
    const x = 'xmlns:x="http://schemas.openxmlformats.org/spreadsheetml/2006/main"';
    const bytes = workbookOf({
      sheets: { Log: '' },
      parts: {
        'xl/worksheets/sheet1.xml': `<x:worksheet ${x}><x:sheetData><x:row><x:c t="s"><x:v>0</x:v></x:c></x:row></x:sheetData></x:worksheet>`,
        'xl/sharedStrings.xml': `<x:sst ${x}><x:si><x:t>J1</x:t></x:si></x:sst>`,
      },
    });
    expect((await rowsOf(bytes))[0]?.cells).toEqual(['J1']);
  });

  test.each([
    ['46082.34375', '46082.34375'],
    ['46082.343749999993', '46082.34374999999'],
    ['0.29999999999999999', '0.3'],
    ['1.0000000000000001E-2', '0.01'],
    ['1E-7', '0.0000001'],
    ['-1.5e+22', '-15000000000000000000000'],
    ['12345678901234567890', '12345678901234567890'],
    ['-0', '0'],
    ['007', '7'],
    ['seven', 'seven'],
  ])('that hold the number %s are the text %s', (number, shortest) => {
    expect(numberText(number)).toBe(shortest);
  });

  test('hold numbers with the decimal sign that the plan reads', async () => {
    const file = await opened(workbookOf({ sheets: { Log: row('<c><v>1.234</v></c>') } }));
    const seen: string[] = [];
    const wanted = { delimiter: null, header: [], plan: { decimalSign: ',' as const } };
    const read = file.rows(wanted, ({ bytes, starts, ends }) => {
      seen.push(bytes.toString('utf8', starts[0], ends[0]));
    });
    for await (const _ of read);
    expect(seen).toEqual(['1,234']);
  });

  test('lie where their reference says', () => {
    expect(['A1', 'Z9', 'AA1', 'XFD1048576', 'b2'].map(columnOf)).toEqual([0, 25, 26, 16383, 1]);
    expect(['12', '', 'ABCD1'].map(columnOf)).toEqual([-1, -1, -1]);
  });
});

describe('serial numbers of a workbook', () => {
  // ECMA-376 part 1, section 18.17.4.1, from memory: its examples of both systems.
  test.each([
    [1900, 1, '1900-01-01T00:00:00'],
    [1900, 59, '1900-02-28T00:00:00'],
    [1900, 60, '1900-02-29T00:00:00'],
    [1900, 61, '1900-03-01T00:00:00'],
    [1900, 2_958_465, '9999-12-31T00:00:00'],
    [1904, 1, '1904-01-02T00:00:00'],
    [1904, 2_957_003, '9999-12-31T00:00:00'],
    [1900, 46_082.34375, '2026-03-01T08:15:00'],
    [1904, 46_082.34375 - 1462, '2026-03-01T08:15:00'],
    [1900, 46_082.999999, '2026-03-02T00:00:00'],
    [1900, 46_082.5 + 0.4 / 86_400, '2026-03-01T12:00:00'],
    [1900, 46_082.5 + 0.6 / 86_400, '2026-03-01T12:00:01'],
    [1900, 0.34375, '08:15:00'],
    [1900, 2_958_466, null],
    [1900, -1, null],
    [1900, NaN, null],
  ] as const)('in the system of %i: %f is %s', (system, serial, told) => {
    expect(new SerialText(system).write(serial)).toBe(told);
  });

  test('agree with what exceljs reads in either system', async () => {
    for (const date1904 of ['0', '1']) {
      const serials = [1, 59, 61, 366, 1462, 25_569, 36_526.5, 46_082.75, 60_000.999];
      const cells = serials.map(
        (serial, index) =>
          `<row r="${index + 1}"><c r="A${index + 1}" s="1"><v>${serial}</v></c></row>`,
      );
      const bytes = workbookOf({
        sheets: { Log: cells.join('') },
        properties: `date1904="${date1904}"`,
        formats: [0, 'dd.mm.yyyy hh:mm'],
      });
      const workbook = new ExcelJS.Workbook();
      await workbook.xlsx.load(bytes as never);
      const theirs = serials.map((_, index) => {
        const { value } = workbook.getWorksheet('Log')?.getCell(index + 1, 1) ?? {};
        return value instanceof Date ? Math.round(value.getTime() / 1000) : value;
      });
      const ours = (await rowsOf(bytes)).map(({ cells: [cell] }) => Date.parse(`${cell}Z`) / 1000);
      // Before 1900-03-01 exceljs counts as if there had been a 29 February.
      const agreed = date1904 === '0' ? 2 : 0;
      expect(ours.slice(agreed)).toEqual(theirs.slice(agreed));
    }
  });

  // Built-in numbers of ECMA-376 part 1, section 18.8.30, from memory; codes as spreadsheets write them.
  test.each([
    [14, undefined, true],
    [22, undefined, true],
    [47, undefined, true],
    [46, undefined, false],
    [0, undefined, false],
    [49, undefined, false],
    [164, 'yyyy\\-mm\\-dd\\ hh:mm:ss', true],
    [164, '[$-409]m/d/yy h:mm AM/PM;@', true],
    [164, 'dd.mm.yyyy', true],
    [164, '[h]:mm:ss', false],
    [164, '[mm]:ss', false],
    [164, '"delivered" 0', false],
    [164, '[Red]#,##0.00;[Blue]-0', false],
    [164, '0.00E+00', false],
    [164, '0\\d', false],
    [164, '_-* #,##0.00\\ "days"_-', false],
    [164, 'General', false],
    [164, 'Standard', false],
    [14, '0.00', false],
  ])('in the format %i %s are moments: %s', (id, code, isDate) => {
    expect(isDateFormat(id, code)).toBe(isDate);
  });

  test('without a date style are read as times by the date system of the workbook', async () => {
    const rows = [
      row(...header.map(text)),
      row(text('J1'), text('Bench'), '<c><v>44620.34375</v></c>', '<c s="1"><v>44620.5</v></c>'),
    ];
    const bytes = workbookOf({
      sheets: { Log: rows.join('') },
      properties: 'date1904="true"',
      formats: [0, 22],
    });
    expect((await readText(bytes)).rows).toMatchObject([
      { started: '2026-03-01T08:15:00.000Z', finished: '2026-03-01T12:00:00.000Z' },
    ]);
  });

  test('in a date style are read also where the plan gives a pattern for text', async () => {
    const rows = [
      headerRow,
      row(text('J1'), text('Bench'), text('1.3.2026 08:15'), '<c s="1"><v>46082.5</v></c>'),
      row(text('J2'), text('Bench'), text('2026-03-01T08:15'), ''),
    ];
    const plan = {
      columns: { job: 'job', area: 'area', started: 'start', finished: 'finish' },
      timeFormat: 'd.M.yyyy HH:mm',
    };
    const read = await readText(workbookOf({ sheets: { Log: rows.join('') }, formats: [0, 22] }), {
      plan,
    });
    expect(read.rows).toMatchObject([
      { started: '2026-03-01T08:15:00.000Z', finished: '2026-03-01T12:00:00.000Z' },
      { reason: 'unreadable-time' },
    ]);
  });
});

describe('rows of a workbook', () => {
  const rows = [
    '<row r="1"><c r="A1" t="inlineStr"><is><t>Export of the week</t></is></c></row>',
    `<row r="3">${header.map(text).join('')}</row>`,
    `<row r="4">${text('J1')}${text('Bench')}${text('2026-03-01')}</row>`,
    '<row r="5"><c r="A5" s="1"/><c r="F5" s="1"/></row>',
    '<row r="6" ht="20"/>',
    `<row r="9">${text('J2')}${text('Bench')}${text('2026-03-01')}${text('')}<c s="1"/>${text(' ')}</row>`,
    `<row r="10">${text('J3')}${text('Bench')}${text('2026-03-01')}${text('')}${text('a note')}</row>`,
  ];
  const bytes = workbookOf({ sheets: { Log: rows.join('') }, formats: [0, 22] });

  test('have the numbers of the sheet and the cells of the header, and blank ones count as blank', async () => {
    const { rows: judged, plan } = await readText(bytes);
    expect(plan).toMatchObject({ headerLine: 3, sheet: 'Log', shape: 'stay' });
    expect(judged.map(({ line, outcome, reason }) => [line, outcome, reason])).toEqual([
      [4, 'accepted', null],
      [5, 'skipped', 'blank-line'],
      [6, 'skipped', 'blank-line'],
      [9, 'accepted', null],
      [10, 'refused', 'wrong-number-of-columns'],
    ]);
    expect(judged.at(-1)?.raw).toBe('J3,Bench,2026-03-01,,a note');
  });

  test('are not read out of order, or from cells that lie nowhere', async () => {
    const order = workbookOf({ sheets: { Log: '<row r="2"/><row r="2"/>' } });
    expect(await failureOf(order)).toMatchObject({ code: 'broken-file' });
    const nowhere = workbookOf({ sheets: { Log: '<row><c r="7"/></row>' } });
    expect(await failureOf(nowhere)).toMatchObject({ code: 'broken-file' });
    const text = workbookOf({ sheets: { Log: '<row><c t="s"><v>3</v></c></row>' } });
    expect((await failureOf(text)).message).toMatch(/Row 1 asks for a text .* does not hold/);
    const beyond = workbookOf({ sheets: { Log: '<row r="1048577"/>' } });
    expect((await failureOf(beyond)).message).toMatch(/more than 1,048,576 rows/);
  });

  test('with more columns than are read, or with cells that are too long, are told', async () => {
    const wide = workbookOf({ sheets: { Log: `${row(text('job'), '<c r="ALN1"><v>1</v></c>')}` } });
    await expect(readText(wide)).rejects.toThrow(/more than 1000 columns/);
    const long = workbookOf({ sheets: { Log: row(text('x'.repeat(32_768))) } });
    expect(await failureOf(long)).toMatchObject({ code: 'cell-too-long' });
    const shared = `<si><t>${'x'.repeat(32_768)}</t></si>`;
    expect(await failureOf(workbookOf({ sheets: { Log: '' }, strings: shared }))).toMatchObject({
      code: 'cell-too-long',
    });
    const cells = Array.from({ length: 40 }, () => text('x'.repeat(32_000)));
    expect(await failureOf(workbookOf({ sheets: { Log: row(...cells) } }))).toMatchObject({
      code: 'row-too-long',
    });
  });
});

describe('sheets of a workbook', () => {
  const log = headerRow + row(text('J1'), text('Bench'), text('2026-03-01'));
  const other = headerRow + row(text('J9'), text('Oven'), text('2026-03-01'));

  test('are told in their order, and the first that has rows below a header is read', async () => {
    const bytes = workbookOf({ sheets: { Cover: row(text('Lowmoor')), Log: log, More: other } });
    const file = await opened(bytes);
    expect(file.sheets).toEqual(['Cover', 'Log', 'More']);
    expect(file.settled).toEqual({ sheet: 'Log' });
    expect(detect({ file, plan: null, timeZone: 'UTC' }).reasons).toContainEqual({
      about: 'sheet',
      reason: 'The workbook has 3 sheets; “Log” is read.',
    });
  });

  test('lie in the archive in any order, hidden ones too', async () => {
    const parts = {
      'xl/worksheets/sheet2.xml': '',
      'xl/worksheets/sheet1.xml': '',
    };
    const made = workbookOf({ sheets: { Log: log, Other: other } });
    const names = Object.keys(parts);
    expect((await opened(made)).settled.sheet).toBe('Log');
    const sheetXml = (rows: string) => `<worksheet><sheetData>${rows}</sheetData></worksheet>`;
    const turned = zipOf({
      [names[0] ?? '']: sheetXml(other),
      [names[1] ?? '']: sheetXml(log),
      'xl/_rels/workbook.xml.rels':
        '<Relationships><Relationship Id="a" Type="x/worksheet" Target="/xl/worksheets/sheet1.xml"/><Relationship Id="b" Type="x/worksheet" Target="worksheets/sheet2.xml"/></Relationships>',
      'xl/workbook.xml':
        '<workbook><sheets><sheet name="Log" state="hidden" r:id="a"/><sheet name="Other" r:id="b"/></sheets></workbook>',
    });
    expect((await opened(turned)).settled.sheet).toBe('Log');
    expect((await rowsOf(turned, { sheet: 'Other' }))[1]?.cells[0]).toBe('J9');
  });

  test('are read as the plan wishes, and an unknown one is refused with the names that there are', async () => {
    const bytes = workbookOf({ sheets: { Log: log, 'Other one': other } });
    expect((await rowsOf(bytes, { sheet: 'Other one' }))[1]?.cells[0]).toBe('J9');
    expect((await rowsOf(bytes, { sheet: ' other ONE' }))[1]?.cells[0]).toBe('J9');
    const failure = await failureOf(bytes, 'Week 12');
    expect(failure.code).toBe('no-such-sheet');
    expect(failure.message).toBe(
      'The workbook has no sheet “Week 12”. Nothing of it was kept. Its sheets are “Log”, “Other one”. Choose among them.',
    );
  });
});

describe('the archive of a workbook', () => {
  const sheets = { Log: headerRow + row(text('J1'), text('Bench'), text('2026-03-01')) };

  test.each<[string, ZipOptions]>([
    ['with data descriptors', { descriptor: 'with-signature' }],
    ['with data descriptors without a signature', { descriptor: 'without-signature' }],
    ['with data descriptors of 64 bits', { descriptor: 'of-64-bits' }],
    ['with sizes of 64 bits', { zip64: true }],
    ['that is not packed', { isStored: true }],
  ])('%s is read, however it is cut into blocks', async (_, zip) => {
    const bytes = workbookOf({ sheets, zip });
    for (const blockBytes of [1, 13, 1000, 1 << 20]) {
      expect((await rowsOf(bytes, {}, header, blockBytes))[1]?.cells).toEqual([
        ...['J1', 'Bench', '2026-03-01', ''],
      ]);
    }
  });

  test.each<[string, Buffer, string, RegExp]>([
    [
      'whose bytes are not those that were packed',
      workbookOf({ sheets, zip: { wrongCrc: true } }),
      'broken-file',
      /The part “.*” of the archive is damaged/,
    ],
    [
      'that breaks off',
      workbookOf({ sheets }).subarray(0, -30),
      'broken-file',
      /breaks off before its end/,
    ],
    [
      'without a directory',
      workbookOf({ sheets, zip: { withoutDirectory: true } }),
      'broken-file',
      /breaks off before its end/,
    ],
    [
      'that is encrypted',
      workbookOf({ sheets, zip: { isEncrypted: true } }),
      'protected-file',
      /protected by a password/,
    ],
    [
      'stored with descriptors',
      workbookOf({ sheets, zip: { isStored: true, descriptor: 'with-signature' } }),
      'wrong-kind',
      /packed in a way that is not read/,
    ],
    [
      'with a document type declaration',
      workbookOf({
        sheets,
        parts: { 'xl/sharedStrings.xml': '<!DOCTYPE sst [<!ENTITY a "b">]><sst/>' },
      }),
      'unsafe-xml',
      /brings a document type declaration/,
    ],
    [
      'with an entity of its own',
      workbookOf({ sheets: { Log: '<row><c t="str"><v>&job;</v></c></row>' } }),
      'unsafe-xml',
      /uses an entity beyond the five/,
    ],
    [
      'with XML that is not closed',
      workbookOf({ sheets: { Log: '<row><c></row>' } }),
      'broken-file',
      /is no proper XML at line 1/,
    ],
    [
      'whose elements lie in one another without end',
      workbookOf({ sheets: { Log: '<a>'.repeat(200) } }),
      'unsafe-xml',
      /nests elements more than 100 deep/,
    ],
    [
      'with text without end',
      workbookOf({ sheets: { Log: `<!--${' '.repeat(3_000_000)}-->` } }),
      'unsafe-xml',
      /a piece longer than/,
    ],
    [
      'that unpacks to a multiple of itself',
      workbookOf({
        sheets: { Log: '<row/>'.repeat(15_000_000) },
        zip: { descriptor: 'with-signature' },
      }),
      'unpacks-too-large',
      /more than 250 times its size/,
    ],
    [
      'without the cells of its sheet',
      zipOf({
        'xl/_rels/workbook.xml.rels':
          '<Relationships><Relationship Id="a" Type="x/worksheet" Target="sheet.xml"/></Relationships>',
        'xl/workbook.xml': '<workbook><sheets><sheet name="Log" r:id="a"/></sheets></workbook>',
      }),
      'broken-file',
      /does not hold the cells/,
    ],
    [
      'without a sheet',
      zipOf({ 'xl/workbook.xml': '<workbook><sheets/></workbook>' }),
      'broken-file',
      /no sheet of cells/,
    ],
    [
      'without a list of sheets',
      zipOf({ 'xl/styles.xml': '<styleSheet/>' }),
      'broken-file',
      /list/,
    ],
  ])('%s is refused with a sentence', async (_, bytes, code, sentence) => {
    const failure = await failureOf(bytes);
    expect(failure.message).toMatch(sentence);
    expect(failure.message).toMatch(/Nothing of it was kept/);
    expect(failure.code).toBe(code);
  });

  test.each<[string, Buffer]>([
    ['an ODS spreadsheet', zipOf({ mimetype: 'application/vnd.oasis.opendocument.spreadsheet' })],
    ['an ODT document', zipOf({ mimetype: 'application/vnd.oasis.opendocument.text' })],
    ['a DOCX document', zipOf({ '[Content_Types].xml': '<Types/>', 'word/document.xml': '<d/>' })],
    ['a PPTX presentation', zipOf({ 'ppt/presentation.xml': '<p/>' })],
    ['a binary workbook \\(XLSB\\)', zipOf({ 'xl/workbook.bin': 'x' })],
    ['a zip archive', zipOf({ 'log.csv': 'job,area\n' })],
    ['a zip archive', zipOf({ 'page.xml': '<!DOCTYPE html><html/>' })],
    ['a zip archive', zipOf({ 'log.csv': 'job,area\n' }).subarray(0, 60)],
  ])('that is %s is named as that', async (kind, bytes) => {
    const failure = await failureOf(bytes);
    expect(failure.message).toMatch(
      new RegExp(`^The file is ${kind}, which is not read\\. Nothing`),
    );
    expect(failure.code).toBe('wrong-kind');
  });
});

describe('a workbook that somebody broke', () => {
  const sheets = {
    Log:
      headerRow +
      Array.from({ length: 20 }, (_, index) =>
        row(text(`J${index}`), '<c t="s"><v>0</v></c>', '<c s="1"><v>46082.5</v></c>'),
      ).join(''),
  };
  const made = { sheets, strings: '<si><t>Bench</t></si>', formats: [0, 22] };
  const readOrFail = async (bytes: Buffer) => {
    try {
      await readText(bytes);
    } catch (error) {
      if (!(error instanceof IntakeFailure)) throw error;
      expect(error.message).toMatch(/\.$/);
    }
  };

  test('anywhere in its bytes ends in rows or in a sentence', async () => {
    const whole = workbookOf(made);
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.tuple(fc.nat(whole.length - 1), fc.nat(255)), { maxLength: 4 }),
        fc.integer({ min: 4, max: whole.length }),
        async (changes, length) => {
          const bytes = Buffer.from(whole);
          for (const [at, byte] of changes) bytes[at] = byte;
          await readOrFail(bytes.subarray(0, changes.length === 0 ? length : undefined));
        },
      ),
      { numRuns: 150 },
    );
  });

  test('anywhere in its XML ends in rows or in a sentence', async () => {
    const piece = fc.constantFrom(
      ...['<', '>', '&', '"', '/', '<row r="x">', '<c r="A1" t="s">', '<v>-1</v>', '</sheetData>'],
      ...[
        '<v>1e999</v>',
        '<![CDATA[',
        '<!--',
        '<?x',
        's="99"',
        '\u0000',
        '&#0;',
        '&#x41;',
        't="zz"',
      ],
    );
    const part = fc.constantFrom(
      ...['xl/workbook.xml', 'xl/_rels/workbook.xml.rels', 'xl/worksheets/sheet1.xml'],
      ...['xl/styles.xml', 'xl/sharedStrings.xml'],
    );
    const parts = workbookParts(workbookOf({ ...made, zip: { isStored: true } }));
    await fc.assert(
      fc.asyncProperty(part, piece, fc.double({ min: 0, max: 1, noNaN: true }), async (...how) => {
        const [name, inserted, where] = how;
        const xml = parts[name] ?? '';
        const at = Math.floor(where * xml.length);
        await readOrFail(zipOf({ ...parts, [name]: xml.slice(0, at) + inserted + xml.slice(at) }));
      }),
      { numRuns: 300 },
    );
  });
});

/** The parts of a hand-made archive that is not packed. */
function workbookParts(bytes: Buffer): Record<string, string> {
  const parts: Record<string, string> = {};
  for (let at = 0; bytes.readUInt32LE(at) === 0x04034b50;) {
    const name = bytes.readUInt16LE(at + 26);
    const content = at + 30 + name + bytes.readUInt16LE(at + 28);
    const end = content + bytes.readUInt32LE(at + 18);
    parts[bytes.toString('utf8', at + 30, at + 30 + name)] = bytes.toString('utf8', content, end);
    at = end;
  }
  return parts;
}
