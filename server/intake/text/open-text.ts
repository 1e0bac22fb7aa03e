import { delimiters, type Delimiter } from '../../../shared/contracts/plan.ts';
import type { FileWishes, Head } from '../open-file.ts';
import type { OnRow, OpenedFile, Opener } from '../opened-file.ts';
import { sampleRows } from '../sample.ts';
import { TextDecoding } from './decode.ts';
import { recogniseText } from './recognise-text.ts';
import { RowScanner } from './row-scanner.ts';

/**
 * Delimited text: its encoding is told from its first bytes, and it can be cut at each of the delimiters.
 *
 * @throws IntakeFailure where it holds no text
 */
export function openText(open: Opener, head: Head, wishes: FileWishes): OpenedFile {
  const form = recogniseText(head.bytes, wishes.encoding);
  const sample = new TextDecoding(form).decode(Buffer.from(head.bytes), head.isWhole);
  return {
    kind: 'text',
    settled: form.isOpen ? {} : { encoding: form.encoding },
    sheets: [],
    dateSystem: 1900,
    headerLine: null,
    cuts: (wishes.delimiter ? [wishes.delimiter] : delimiters).map((delimiter) => ({
      delimiter,
      rows: sampleRows(sample, head.isWhole, delimiter),
    })),
    rows: ({ delimiter }, onRow) => readRows(open, new TextDecoding(form), delimiter ?? ',', onRow),
  };
}

async function* readRows(
  open: Opener,
  decoding: TextDecoding,
  delimiter: Delimiter,
  onRow: OnRow,
): AsyncGenerator<number> {
  const scanner = new RowScanner(delimiter);
  let goesOn = true;
  const take: OnRow = (row) => {
    goesOn = onRow(row) !== false;
    return goesOn;
  };
  let bytes = 0;
  for await (const block of open()) {
    bytes += block.length;
    scanner.scan(decoding.decode(block, false), false, take);
    if (!goesOn) return;
    yield bytes;
  }
  scanner.scan(decoding.decode(Buffer.alloc(0), true), true, take);
  yield bytes;
}
