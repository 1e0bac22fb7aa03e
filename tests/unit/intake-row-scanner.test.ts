import { parse } from 'csv-parse/sync';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { rowByteLimit } from '../../server/intake/limits.ts';
import { RowScanner } from '../../server/intake/text/row-scanner.ts';
import { cellsOf, rawOf } from '../../server/intake/sample.ts';

interface SeenRow {
  line: number;
  cells: string[];
  raw: string;
  trouble: string | null;
}

/** Scans a text cut into blocks of the given sizes, again and again. */
function scan(text: string, delimiter = ',', blockSizes: number[] = [1 << 20]): SeenRow[] {
  const bytes = Buffer.from(text);
  const scanner = new RowScanner(delimiter);
  const rows: SeenRow[] = [];
  const take = (block: Buffer, isLast: boolean): void => {
    scanner.scan(block, isLast, (row) => {
      const { line, trouble } = row;
      rows.push({ line, trouble, cells: cellsOf(row), raw: rawOf(row) });
    });
  };
  for (let at = 0, turn = 0; at < bytes.length; turn++) {
    const size = blockSizes[turn % blockSizes.length] ?? 1;
    take(Buffer.from(bytes.subarray(at, at + size)), false);
    at += size;
  }
  take(Buffer.alloc(0), true);
  return rows;
}

const delimiter = fc.constantFrom(',', ';', '\t', '|');
const lineEnd = fc.constantFrom('\n', '\r\n');
const plainText = fc.stringMatching(/^[a-zé0-9 .:-]{0,12}$/);
const anyText = fc
  .array(fc.constantFrom('a', 'b', '"', ',', ';', '\n', '\r\n', ' ', 'ü', '|', '\t', '7'), {
    maxLength: 8,
  })
  .map((parts) => parts.join(''));

const quoted = (text: string): string => `"${text.replaceAll('"', '""')}"`;
const cell = fc.oneof(
  plainText,
  plainText.map(quoted),
  anyText.map(quoted),
  anyText.map((text) => ` ${quoted(text)} `),
);

describe('rows of delimited text', () => {
  test('are those that csv-parse reads, however the text is cut into blocks', () => {
    fc.assert(
      fc.property(
        delimiter,
        fc.array(fc.tuple(fc.array(cell, { minLength: 1, maxLength: 5 }), lineEnd), {
          minLength: 1,
          maxLength: 12,
        }),
        fc.boolean(),
        fc.array(fc.integer({ min: 1, max: 40 }), { minLength: 1, maxLength: 5 }),
        (by, rows, hasLastEnd, blockSizes) => {
          const text = rows
            .map(([cells, end], index) =>
              index === rows.length - 1 && !hasLastEnd ? cells.join(by) : cells.join(by) + end,
            )
            .join('');
          const expected: string[][] = parse(text, {
            delimiter: by,
            record_delimiter: ['\r\n', '\n'],
            relax_column_count: true,
            relax_quotes: true,
            trim: true,
          });
          const seen = scan(text, by, blockSizes);
          // A last line of blanks alone is no record to csv-parse; the row account must count it.
          if (/(?:^|\n)[ \t]+$/.test(text) && seen.at(-1)?.cells.length === 1) expected.push(['']);
          const trimmed = (each: string[][]): string[][] =>
            each.map((cells) => cells.map((one) => one.trim()));
          expect(trimmed(seen.map(({ cells }) => cells))).toEqual(trimmed(expected));
          expect(seen.every(({ trouble }) => trouble === null)).toBe(true);
        },
      ),
      {
        numRuns: 400,
        examples: [[',', [[[' '], '\n']], false, [1]]],
      },
    );
  });

  test('lose no byte, whatever the bytes and however they are cut', () => {
    fc.assert(
      fc.property(
        fc.array(fc.constantFrom('a', '"', '""', ',', '\n', '\r\n', ' ', 'b,c', '"x"'), {
          maxLength: 60,
        }),
        fc.array(fc.integer({ min: 1, max: 9 }), { minLength: 1, maxLength: 5 }),
        (parts, blockSizes) => {
          const text = parts.join('');
          const rows = scan(text, ',', blockSizes);
          expect(rows).toEqual(scan(text));
          // Raw rows with their line ends put back are the text, but for returns before line feeds.
          const together = rows.map(({ raw }) => raw).join('\n');
          const withoutReturns = text.replaceAll('\r', '');
          expect(together.replaceAll('\r', '')).toBe(withoutReturns.replace(/\n$/, ''));
          const lines = text.split('\n');
          for (const { line, raw } of rows) {
            expect(lines[line - 1]?.startsWith(raw.split('\n')[0] ?? '')).toBe(true);
          }
        },
      ),
      { numRuns: 600 },
    );
  });

  test('say on which physical line they begin', () => {
    const rows = scan('a,b\n"two\nlines",x\r\n\nlast,y');
    expect(rows.map(({ line }) => line)).toEqual([1, 2, 4, 5]);
    expect(rows[1]?.cells).toEqual(['two\nlines', 'x']);
  });

  test('keep quotation marks within unquoted cells', () => {
    expect(scan('5" pipe,the "old" one')[0]?.cells).toEqual(['5" pipe', 'the "old" one']);
  });

  test('with a quote that nothing closes swallow no row behind them', () => {
    const rows = scan('a,b\n"open,1\nc,2\nd,3\n');
    expect(rows.map(({ trouble }) => trouble)).toEqual([null, 'quote-not-closed', null, null]);
    expect(rows[1]?.raw).toBe('"open,1');
    expect(rows[3]?.cells).toEqual(['d', '3']);
  });

  test('with text behind a closing quote are in trouble alone', () => {
    const rows = scan('a,b\n"x"y,1\n"c","2"\n');
    expect(rows.map(({ trouble }) => trouble)).toEqual([null, 'malformed-quotes', null]);
    expect(rows[2]?.cells).toEqual(['c', '2']);
  });

  test('end a quoted cell that grows beyond the limit on a row at its first line', () => {
    const rows = scan(`"open,1\n${'filler,2\n'.repeat(rowByteLimit / 9 + 10)}`, ',', [65_536]);
    expect(rows[0]).toMatchObject({ line: 1, trouble: 'quote-not-closed', raw: '"open,1' });
    expect(rows[1]?.cells).toEqual(['filler', '2']);
  });

  test('longer than the limit on one line fail the file', () => {
    expect(() => scan(`a,b\n${'x'.repeat(rowByteLimit + 1)}`, ',', [65_536])).toThrow(
      IntakeFailure,
    );
  });
});
