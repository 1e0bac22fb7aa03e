import { formatInTimeZone } from './format-in-zone.ts';

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
const local = (pattern: string) => (at: number) => formatInTimeZone(at, exportZone, pattern);

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

type Table = string[][];
const fill = (at: number | null, time: (at: number) => string): string =>
  at === null ? '' : time(at);

/** The log as a table with its header, in one of the shapes. */
export function tableOf(
  log: readonly LogStay[],
  shape: ExportShape,
  { time, decimalSign }: Pick<Dialect, 'time' | 'decimalSign'>,
): Table {
  const number = (text: string) => text.replace('.', decimalSign);
  switch (shape) {
    case 'stay':
      return [
        ['Job', 'Area', 'Arrival', 'Start', 'Finish', 'Quantity'],
        ...log.map((stay) => [
          stay.job,
          stay.area,
          ...[stay.arrived, stay.started, stay.finished].map((at) => fill(at, time)),
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
      return jobTable(log, time, number);
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

function jobTable(
  log: readonly LogStay[],
  time: (at: number) => string,
  number: (text: string) => string,
): Table {
  const areas = [...new Set(log.map(({ area }) => area))];
  const jobs = [...new Set(log.map(({ job }) => job))];
  const columns = areas.flatMap((area) => [`${area} arrival`, `${area} start`, `${area} finish`]);
  const rows = jobs.map((job) => {
    const stays = log.filter((stay) => stay.job === job);
    const cells = areas.flatMap((area) => {
      const stay = stays.find((each) => each.area === area);
      return [stay?.arrived ?? null, stay?.started ?? null, stay?.finished ?? null].map((at) =>
        fill(at, time),
      );
    });
    return [job, ...cells, number(stays[0]?.quantity ?? '')];
  });
  return [['Job', ...columns, 'Quantity'], ...rows];
}

/** A table as delimited text (RFC 4180, but for the delimiter). */
export function asText(table: Table, { delimiter, lineEnd, quoteAll }: Dialect): string {
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
