import { tz } from '@date-fns/tz';
import { format } from 'date-fns';
import ExcelJS from 'exceljs';
import { escapeXml } from './workbook.ts';

/** One stay of the log that every export tells; moments in milliseconds, to the second. */
export interface LogStay {
  job: string;
  area: string;
  arrived: number | null;
  started: number | null;
  finished: number | null;
  quantity: string;
}

export type ExportShape = 'stay' | 'event' | 'job';

/** How an export writes its times and numbers. */
export interface Dialect {
  name: string;
  delimiter: ',' | ';' | '\t' | '|';
  lineEnd: '\n' | '\r\n';
  quoteAll: boolean;
  decimalSign: '.' | ',';
  time: (at: number) => string;
}

export const exportZone = 'Europe/Dublin';
const local = (pattern: string) => (at: number) => format(at, pattern, { in: tz(exportZone) });

export const dialects: readonly Dialect[] = [
  {
    name: 'commas, ISO 8601 with offset',
    ...{ delimiter: ',', lineEnd: '\n', quoteAll: false, decimalSign: '.' },
    time: (at) => new Date(at).toISOString(),
  },
  {
    name: 'semicolons, day first, decimal comma, all quoted',
    ...{ delimiter: ';', lineEnd: '\r\n', quoteAll: true, decimalSign: ',' },
    time: local('dd.MM.yyyy HH:mm:ss'),
  },
  {
    name: 'tabs, local ISO 8601',
    ...{ delimiter: '\t', lineEnd: '\r\n', quoteAll: false, decimalSign: '.' },
    time: local("yyyy-MM-dd'T'HH:mm:ss"),
  },
  {
    name: 'pipes, month first, twelve hours',
    ...{ delimiter: '|', lineEnd: '\n', quoteAll: false, decimalSign: '.' },
    time: local('MM/dd/yyyy hh:mm:ss a'),
  },
];

/** How the cells of times and quantities are made. */
interface Cells<TimeCell> {
  time: (at: number) => TimeCell;
  decimalSign?: '.' | ',';
}

/** The log as a table with its header, in one of the shapes; what is not known is an empty text. */
export function tableOf<TimeCell>(
  log: readonly LogStay[],
  shape: ExportShape,
  { time, decimalSign = '.' }: Cells<TimeCell>,
): (string | TimeCell)[][] {
  const number = (text: string) => text.replace('.', decimalSign);
  const filled = (at: number | null) => (at === null ? '' : time(at));
  switch (shape) {
    case 'stay':
      return [
        ['Job', 'Area', 'Arrival', 'Start', 'Finish', 'Quantity'],
        ...log.map((stay) => [
          stay.job,
          stay.area,
          ...[stay.arrived, stay.started, stay.finished].map(filled),
          number(stay.quantity),
        ]),
      ];
    case 'event':
      return [
        ['Job', 'Area', 'Event', 'Time', 'Quantity'],
        ...eventsOf(log).map(({ stay, word, at }) => [
          stay.job,
          stay.area,
          word,
          time(at),
          number(stay.quantity),
        ]),
      ];
    case 'job':
      return jobTable(log, filled, number);
  }
}

/** The events of the log, latest first: their order means nothing. */
export function eventsOf(log: readonly LogStay[]) {
  return log
    .flatMap((stay) =>
      (
        [
          ['Arrived', stay.arrived],
          ['Started', stay.started],
          ['Finished', stay.finished],
        ] as const
      ).flatMap(([word, at]) => (at === null ? [] : [{ stay, word, at }])),
    )
    .sort((a, b) => b.at - a.at);
}

function jobTable<Cell>(
  log: readonly LogStay[],
  filled: (at: number | null) => Cell,
  number: (text: string) => string,
): (string | Cell)[][] {
  const areas = [...new Set(log.map(({ area }) => area))];
  const jobs = [...new Set(log.map(({ job }) => job))];
  const columns = areas.flatMap((area) => [`${area} arrival`, `${area} start`, `${area} finish`]);
  const rows = jobs.map((job) => {
    const stays = log.filter((stay) => stay.job === job);
    const cells = areas.flatMap((area) => {
      const stay = stays.find((each) => each.area === area);
      return [stay?.arrived ?? null, stay?.started ?? null, stay?.finished ?? null].map(filled);
    });
    return [job, ...cells, number(stays[0]?.quantity ?? '')];
  });
  return [['Job', ...columns, 'Quantity'], ...rows];
}

/** A table as delimited text (RFC 4180, but for the delimiter). */
export function asText(
  table: readonly string[][],
  { delimiter, lineEnd, quoteAll }: Dialect,
): string {
  const cell = (text: string) =>
    quoteAll || text.includes(delimiter) || /["\n]/.test(text)
      ? `"${text.replaceAll('"', '""')}"`
      : text;
  return table.map((row) => row.map(cell).join(delimiter) + lineEnd).join('');
}

const swapped = (bytes: Buffer): Buffer => Buffer.from(bytes).swap16();

/** Ways of writing a text as bytes; all can hold what the log holds. */
export const encoders: Readonly<Record<string, (text: string) => Buffer>> = {
  'UTF-8': (text) => Buffer.from(text),
  'UTF-8 with a mark': (text) => Buffer.from(`\uFEFF${text}`),
  'UTF-16LE with a mark': (text) => Buffer.from(`\uFEFF${text}`, 'utf16le'),
  'UTF-16BE with a mark': (text) => swapped(Buffer.from(`\uFEFF${text}`, 'utf16le')),
  'UTF-16LE without a mark': (text) => Buffer.from(text, 'utf16le'),
  // The letters of the log are the same in Latin-1 as in Windows-1252.
  'Windows-1252': (text) => Buffer.from(text, 'latin1'),
};

export type SheetTimes = 'date cells' | 'date cells of 1904' | 'numbers' | 'text';
export const sheetTimes = [
  'date cells',
  'date cells of 1904',
  'numbers',
  'text',
] as const satisfies readonly SheetTimes[];

/** What a wall clock of the zone shows, as if it were UTC: so spreadsheets keep times. */
const wallClock = (at: number): Date => new Date(`${local("yyyy-MM-dd'T'HH:mm:ss")(at)}Z`);
const serialOf1970 = 25_569;

/** The log as a workbook, by an independent writer; the log is not on its first sheet. */
export async function asWorkbook(
  log: readonly LogStay[],
  shape: ExportShape,
  times: SheetTimes,
): Promise<Buffer> {
  const workbook = new ExcelJS.Workbook();
  workbook.properties.date1904 = times === 'date cells of 1904';
  workbook.addWorksheet('Cover').addRow(['Lowmoor Instrument Works']);
  const sheet = workbook.addWorksheet('Log');
  const time = (at: number): ExcelJS.CellValue => {
    if (times === 'text') return local('dd.MM.yyyy HH:mm:ss')(at);
    return times === 'numbers'
      ? wallClock(at).getTime() / 86_400_000 + serialOf1970
      : wallClock(at);
  };
  for (const cells of tableOf(log, shape, { time })) {
    sheet.addRow(cells.map((cell) => (cell === '' ? null : cell))).eachCell((cell) => {
      if (cell.value instanceof Date) cell.numFmt = 'dd.mm.yyyy hh:mm:ss';
    });
  }
  return Buffer.from(await workbook.xlsx.writeBuffer());
}

const lifeCycle = { Arrived: 'schedule', Started: 'start', Finished: 'complete' } as const;

/** The log in XES (IEEE 1849-2016): a trace is a job, and its events say where they stand in the life cycle. */
export function asXes(log: readonly LogStay[], encoding: string): string {
  const jobs = [...new Set(log.map(({ job }) => job))];
  const traces = jobs.map((job) => {
    const events = eventsOf(log.filter((stay) => stay.job === job)).map(({ stay, word, at }) =>
      [
        `<event><string key="concept:name" value="${escapeXml(stay.area)}"/>`,
        `<string key="lifecycle:transition" value="${lifeCycle[word]}"/>`,
        `<date key="time:timestamp" value="${local("yyyy-MM-dd'T'HH:mm:ssxxx")(at)}"/>`,
        `<float key="quantity" value="${stay.quantity}"/></event>`,
      ].join(''),
    );
    return `<trace><string key="concept:name" value="${job}"/>${events.join('')}</trace>`;
  });
  return `<?xml version="1.0" encoding="${encoding}"?>\n<log xes.version="1849-2016">${traces.join('\n')}</log>`;
}
