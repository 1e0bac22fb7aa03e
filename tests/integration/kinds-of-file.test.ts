import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { asWorkbook, asXes, exportZone, type LogStay } from '../support/export-writer.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const at = (time: string): number => Date.parse(`2026-01-12T${time}Z`);
const log: LogStay[] = [
  {
    ...{ job: 'J-1000', area: 'Fräsen', quantity: '1' },
    ...{ arrived: at('07:00:00'), started: at('07:00:00'), finished: at('08:00:07') },
  },
];

/** Uploads a file into a site of its own, without a plan. */
async function loaded(
  bytes: Buffer,
  fileName: string,
): Promise<{ upload: Upload; site: TestSite }> {
  const site = await makeSite(test, { timeZone: exportZone });
  const upload = await site.upload(bytes, undefined, fileName);
  expect(upload).toMatchObject({ status: 'loaded', account: { refused: 0, skipped: 0 } });
  expect(upload.progress.bytes).toBe(bytes.length);
  return { upload, site };
}

describe('a row of a file that is no text', () => {
  it('is handed out as it came: of a workbook by its row, of an event log by its event', async () => {
    const sheet = await loaded(await asWorkbook(log, 'stay', 'date cells'), 'log.xlsx');
    expect(await sheet.site.get(`/uploads/${sheet.upload.id}/rows/2`)).toMatchObject({
      header: ['Job', 'Area', 'Arrival', 'Start', 'Finish', 'Quantity'],
      cells: [
        'J-1000',
        'Fräsen',
        ...Array.from({ length: 2 }, () => '2026-01-12T07:00:00'),
        '2026-01-12T08:00:07',
        '1',
      ],
    });
    const events = await loaded(Buffer.from(asXes(log, 'utf-8')), 'log.xes');
    expect(await events.site.get(`/uploads/${events.upload.id}/rows/3`)).toMatchObject({
      header: expect.arrayContaining(['trace concept:name']) as string[],
      cells: expect.arrayContaining(['J-1000', 'Fräsen', '2026-01-12T07:00:00+00:00']) as string[],
    });
  });
});

describe('a file of the wrong kind', () => {
  it('is named for what it is, in the account and in the preview', async () => {
    const site = await makeSite(test);
    const page = '<html><body><table><tr><td>job</td></tr></table></body></html>';
    const upload = await site.upload(page, undefined, 'log.xls');
    expect(upload).toMatchObject({
      ...{ status: 'failed', error: 'wrong-kind' },
      errorDetail: expect.stringMatching(/^The file is an HTML page/) as string,
    });
    const answer = await site.agent
      .post(`/api/sites/${site.id}/upload-preview`)
      .attach('file', Buffer.from('PK\u0003\u0004'), 'log.xlsx')
      .expect(400);
    expect((answer.body as { detail: string }).detail).toMatch(/^The archive breaks off/);
  });
});
