import ExcelJS from 'exceljs';
import type { Delimiter, Encoding, Shape } from '../../shared/contracts/plan.ts';
import { escapeXml } from './workbook.ts';

/** A stay of the one log that is written in every kind of file; moments in milliseconds, all in winter. */
export interface SourceStay {
  job: string;
  area: string;
  arrived: number;
  started: number;
  finished: number | null;
}

/** All moments lie in winter, when local time is an hour ahead of UTC. */
export const sourceZone = 'Europe/Berlin';
const hourMs = 3_600_000;
const areas = ['Fräsen', 'Oven 2', 'Prüfung'];
const events = ['arrived', 'started', 'finished'] as const;

/** Jobs that go through all areas; the last one is still in the last area. */
export const sourceLog: readonly SourceStay[] = Array.from({ length: 8 }, (_, job) =>
  areas.map((area, place) => {
    const arrived = Date.UTC(2026, 0, 12 + job, 6) + place * 5 * hourMs + job * 61_000;
    const started = arrived + (job % 3) * 1_234_000;
    const isOpen = job === 7 && place === areas.length - 1;
    return {
      ...{ job: `J-${1000 + job}`, area, arrived, started },
      finished: isOpen ? null : started + (1 + ((job + place) % 4)) * hourMs + 7000,
    };
  }),
).flat();

type SourceCell = string | { at: number | null };
type WriteTime = (at: number) => string;

/** The log as a table of one of the shapes. */
export function tableOf(shape: Shape): { header: string[]; rows: SourceCell[][] } {
  const times = (stay: SourceStay) => events.map((event) => ({ at: stay[event] }));
  if (shape === 'stay') {
    const rows = sourceLog.map((stay) => [stay.job, stay.area, ...times(stay)]);
    return { header: ['Job', 'Area', 'Arrival', 'Start', 'Finish'], rows };
  }
  if (shape === 'event') {
    const rows = sourceLog.flatMap((stay) =>
      events
        .filter((event) => stay[event] !== null)
        .map((event) => [stay.job, stay.area, event, { at: stay[event] }]),
    );
    return { header: ['Job', 'Area', 'Event', 'Time'], rows };
  }
  const jobs = [...new Set(sourceLog.map(({ job }) => job))];
  const header = areas.flatMap((area) => [`${area} arrival`, `${area} start`, `${area} finish`]);
  const rows = jobs.map((job) => [
    job,
    ...sourceLog.filter((stay) => stay.job === job).flatMap(times),
  ]);
  return { header: ['Job', ...header], rows };
}

const local = (at: number): string => new Date(at + hourMs).toISOString();
const serial1900 = (at: number): number => (at + hourMs) / 86_400_000 + 25_569;

/** Ways to write a time as text, by name. */
export const timesAsText = {
  'ISO 8601 with an offset': (at) => `${local(at).slice(0, 19)}+01:00`,
  'ISO 8601 in local time': (at) => local(at).slice(0, 19).replace('T', ' '),
  'day first': (at) => {
    const [day = '', time = ''] = local(at).split('T');
    return `${day.split('-').reverse().join('.')} ${time.slice(0, 8)}`;
  },
  'epoch milliseconds': (at) => String(at),
  'spreadsheet serials': (at) => serial1900(at).toFixed(8),
} satisfies Record<string, WriteTime>;

export interface Dialect {
  delimiter: Delimiter;
  encoding: Encoding;
  times: keyof typeof timesAsText;
  isQuoted: boolean;
}

/** The log as delimited text. */
export function asDelimited(shape: Shape, dialect: Dialect): Buffer {
  const { header, rows } = tableOf(shape);
  const write = timesAsText[dialect.times];
  const quote = (cell: string): string => (dialect.isQuoted ? `"${cell}"` : cell);
  const lines = [header, ...rows.map((cells) => cells.map((cell) => textOf(cell, write)))].map(
    (cells) => cells.map(quote).join(dialect.delimiter),
  );
  return encode(`${lines.join('\r\n')}\r\n`, dialect.encoding);
}

const textOf = (cell: SourceCell, write: WriteTime): string =>
  typeof cell === 'string' ? cell : cell.at === null ? '' : write(cell.at);

function encode(text: string, encoding: Encoding): Buffer {
  if (encoding === 'windows-1252') return Buffer.from(text, 'latin1');
  if (encoding === 'utf-8') return Buffer.from(text);
  const wide = Buffer.from(`\uFEFF${text}`, 'utf16le');
  return encoding === 'utf-16le' ? wide : wide.swap16();
}

export type SheetTimes = 'date cells' | 'date cells of 1904' | 'numbers' | 'text';

/** The log as a workbook, by an independent writer; the log is not on its first sheet. */
export async function asWorkbook(shape: Shape, times: SheetTimes): Promise<Buffer> {
  const workbook = new ExcelJS.Workbook();
  workbook.properties.date1904 = times === 'date cells of 1904';
  workbook.addWorksheet('Cover').addRow(['Lowmoor Instrument Works']);
  const sheet = workbook.addWorksheet('Log');
  const { header, rows } = tableOf(shape);
  sheet.addRow(header);
  for (const cells of rows) {
    sheet
      .addRow(cells.map((cell) => (typeof cell === 'string' ? cell : valueOf(cell.at, times))))
      .eachCell((cell) => {
        if (cell.value instanceof Date) cell.numFmt = 'dd.mm.yyyy hh:mm:ss';
      });
  }
  return Buffer.from(await workbook.xlsx.writeBuffer());
}

function valueOf(at: number | null, times: SheetTimes): ExcelJS.CellValue {
  if (at === null) return null;
  if (times === 'numbers') return serial1900(at);
  return times === 'text' ? timesAsText['day first'](at) : new Date(at + hourMs);
}

/** The log in XES (IEEE 1849-2016): a trace is a job, and its events say where they stand in the life cycle. */
export function asXes(encoding: Encoding): Buffer {
  const jobs = [...new Set(sourceLog.map(({ job }) => job))];
  const traces = jobs.map((job) => {
    const stays = sourceLog.filter((stay) => stay.job === job);
    return `<trace><string key="concept:name" value="${job}"/>${stays.map(eventsOf).join('')}</trace>`;
  });
  const declared = encoding.startsWith('utf-16') ? 'utf-16' : encoding;
  return encode(
    `<?xml version="1.0" encoding="${declared}"?>\n<log xes.version="1849-2016">${traces.join('\n')}</log>`,
    encoding,
  );
}

const lifeCycle = { arrived: 'schedule', started: 'start', finished: 'complete' } as const;

function eventsOf(stay: SourceStay): string {
  return events
    .map((event) => {
      const at = stay[event];
      if (at === null) return '';
      const attributes = [
        `<string key="concept:name" value="${escapeXml(stay.area)}"/>`,
        `<string key="lifecycle:transition" value="${lifeCycle[event]}"/>`,
        `<date key="time:timestamp" value="${timesAsText['ISO 8601 with an offset'](at)}"/>`,
      ];
      return `<event>${attributes.join('')}</event>`;
    })
    .join('');
}
