import type { FileWishes, Head } from '../open-file.ts';
import { IntakeFailure } from '../failure.ts';
import type { OnRow, OpenedFile, Opener } from '../opened-file.ts';
import { sampleRow, sampleRowLimit, type SampleRow } from '../sample.ts';
import { XmlReader, type XmlHandler } from '../xml/xml-reader.ts';
import { EventColumns, EventLog } from './event-log.ts';

const subject = {
  name: 'The event log',
  remedy: 'Export it again as XES, or as CSV, and upload that.',
};

/**
 * An event log in XES (IEEE 1849-2016): each event is a row, numbered from 1. Its columns are the attributes
 * that the log declares for all traces and events, and those of its first events.
 *
 * @throws IntakeFailure where it is no proper XML, or asks for more than is read
 */
export async function openXes(open: Opener, head: Head, _wishes: FileWishes): Promise<OpenedFile> {
  const columns = new EventColumns();
  const events = await firstEvents(open, head, columns);
  return {
    kind: 'xes',
    settled: {},
    sheets: [],
    dateSystem: 1900,
    headerLine: 0,
    cuts: [{ delimiter: null, rows: [{ line: 0, cells: columns.header, raw: '' }, ...events] }],
    rows: (_, onRow) => readEvents(open, columns, onRow),
  };
}

async function firstEvents(open: Opener, head: Head, columns: EventColumns): Promise<SampleRow[]> {
  const rows: SampleRow[] = [];
  const take: OnRow = (row) => rows.push(sampleRow(row)) <= sampleRowLimit;
  const log = new EventLog(columns, take, (scope, key) => columns.add(scope, key));
  try {
    for await (const _ of blocksRead(open, log)) if (log.isDone) break;
  } catch (error) {
    // Of a beginning that is cut the last event is missing; what comes of it is seen when all is read.
    if (head.isWhole || !(error instanceof IntakeFailure) || rows.length === 0) throw error;
  }
  return rows;
}

async function* readEvents(
  open: Opener,
  columns: EventColumns,
  onRow: OnRow,
): AsyncGenerator<number> {
  const log = new EventLog(columns, onRow);
  for await (const bytes of blocksRead(open, log)) {
    if (log.isDone) return;
    yield bytes;
  }
}

/** Yields how many bytes were read after each block. */
async function* blocksRead(open: Opener, handler: XmlHandler): AsyncGenerator<number> {
  const reader = new XmlReader(handler, subject);
  let bytes = 0;
  for await (const block of open()) {
    bytes += block.length;
    reader.write(block);
    yield bytes;
  }
  reader.end();
  yield bytes;
}
