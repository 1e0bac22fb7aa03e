import { createReadStream } from 'node:fs';
import path from 'node:path';
import { parse } from 'csv-parse';
import ExcelJS from 'exceljs';
import type { Bar } from './measure.ts';
import { BenchServer } from './server.ts';
import { writeSimulatedLog } from './simulated-log.ts';

const rows = { few: 20_000, many: 200_000 } as const;

/** How fast a workbook is read against the same rows as text, and what it takes of the server's memory. */
export async function measureWorkbook(
  databaseUrl: string,
  folder: string,
  bar: (bar: Bar) => void,
): Promise<void> {
  const few = await writeLog(folder, 'W', rows.few);
  const many = await writeLog(folder, 'X', rows.many);
  // A server of its own: the most memory that a process has held is all that is known of it.
  const server = await BenchServer.start(databaseUrl);
  try {
    const fewSite = await server.makeSite('Few rows of a workbook');
    server.forgetPeak();
    await server.upload(fewSite, few.workbook);
    const fewMegabytes = server.peakMegabytes();
    const workbook = await server.upload(await server.makeSite('Workbook'), many.workbook);
    const manyMegabytes = server.peakMegabytes();
    const text = await server.upload(await server.makeSite('The same as text'), many.text);
    bar({
      what: `read XLSX with ${rows.many.toLocaleString('en')} rows / the same as CSV`,
      value: workbook.readSeconds / text.readSeconds,
      unit: '×',
      atMost: 12,
    });
    bar({
      what: 'XLSX to visible figures / the same as CSV',
      value: workbook.seconds / text.seconds,
      unit: '×',
    });
    bar({
      what: `server memory, XLSX with ${rows.many.toLocaleString('en')} / ${rows.few.toLocaleString('en')} rows`,
      value: manyMegabytes / fewMegabytes,
      unit: '×',
      atMost: 1.2,
    });
    bar({
      what: 'server memory with XLSX at most',
      value: manyMegabytes,
      unit: 'MB',
      atMost: 200,
    });
  } finally {
    await server.stop();
  }
}

/** One simulated log as text and as a workbook. */
async function writeLog(folder: string, prefix: string, count: number) {
  const text = path.join(folder, `${prefix}.csv`);
  const workbook = path.join(folder, `${prefix}.xlsx`);
  const span = { from: new Date('2025-01-01T00:00:00Z'), days: 300 };
  await writeSimulatedLog({ file: text, rows: count, prefix, seed: count, ...span });
  await writeWorkbook(text, workbook);
  return { text, workbook };
}

async function writeWorkbook(text: string, filename: string): Promise<void> {
  const writer = new ExcelJS.stream.xlsx.WorkbookWriter({
    ...{ filename, useSharedStrings: true, useStyles: true },
  });
  const sheet = writer.addWorksheet('Log');
  for (const column of [3, 4]) sheet.getColumn(column).numFmt = 'yyyy-mm-dd hh:mm:ss';
  sheet.addRow(['job', 'area', 'start', 'finish']).commit();
  for await (const cells of createReadStream(text).pipe(parse({ from_line: 2 }))) {
    const [job, area, start = '', finish = ''] = cells as string[];
    sheet.addRow([job, area, new Date(start), new Date(finish)]).commit();
  }
  await writer.commit();
}
