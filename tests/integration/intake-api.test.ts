import { parse } from 'csv-parse/sync';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Upload, UploadPreview } from '../../shared/contracts/uploads.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { makeSite, type TestSite } from '../support/site.ts';

const csv = [
  'job,area,start,finish',
  'J1,Bench,2026-01-05T08:00Z,2026-01-05T09:00Z',
  'J2,Bench,2026-01-05T08:30Z,',
  'J3,Bench,yesterday,2026-01-05T09:00Z',
  '',
  '=J4,,2026-01-05T08:00Z,',
].join('\n');

let test: TestApp;
let site: TestSite;

beforeAll(async () => {
  test = await startTestApp();
  site = await makeSite(test);
});
afterAll(() => test.close());

const path = (below: string): string => `/api/sites/${site.id}${below}`;

describe('an upload through the API', () => {
  it('is read by the guessed plan, and every row is accounted for', async () => {
    const upload = await site.upload(csv);
    expect(upload).toMatchObject({
      status: 'loaded',
      fileName: 'export.csv',
      error: null,
      progress: { rows: 5, bytes: csv.length, bytesTotal: csv.length },
      plan: { columns: { job: 'job', area: 'area', started: 'start', finished: 'finish' } },
      account: {
        rowsRead: 5,
        skipped: 1,
        new: 2,
        refused: 2,
        refusedBy: { 'unreadable-time': 1, 'missing-area': 1 },
        warnings: { 'no-finish': 1 },
      },
      dataUntil: '2026-01-05T09:00:00.000Z',
    });
  });

  it('hands out its refused rows and any row of its file', async () => {
    const upload = await site.upload(csv);
    const answer = await site.agent.get(path(`/uploads/${upload.id}/refused.csv`)).expect(200);
    expect(answer.headers['content-type']).toMatch(/^text\/csv; charset=utf-8/);
    const rows: string[][] = parse(answer.text, { record_delimiter: '\r\n' });
    expect(rows.map(([line, reason, , row]) => [line, reason, row])).toEqual([
      ['line', 'reason', 'row'],
      ['4', 'unreadable-time', 'J3,Bench,yesterday,2026-01-05T09:00Z'],
      ['6', 'missing-area', "'=J4,,2026-01-05T08:00Z,"],
    ]);
    expect(await site.get(`/uploads/${upload.id}/rows/3`)).toEqual({
      uploadId: upload.id,
      fileName: 'export.csv',
      line: 3,
      header: ['job', 'area', 'start', 'finish'],
      cells: ['J2', 'Bench', '2026-01-05T08:30Z', ''],
    });
    await site.agent.get(path(`/uploads/${upload.id}/rows/7`)).expect(404);
  });

  it.each([
    ['empty-file', ''],
    ['header-only', 'job,area,start,finish\n'],
    ['wrong-kind', '%PDF-1.7\n'],
    ['column-not-found', 'colour,size\nred,3\n'],
  ])('fails as %s with a sentence, and leaves nothing in the site', async (code, text) => {
    const before = await site.zones();
    const upload = await site.upload(text);
    expect(upload).toMatchObject({ status: 'failed', error: code, account: { rowsRead: 0 } });
    expect(upload.errorDetail).toMatch(/Nothing of it was kept/);
    expect(await site.zones()).toEqual(before);
  });

  it('that failed cannot be withdrawn or stopped, and one that never was is not found', async () => {
    const { id } = await site.upload('');
    await site.agent.delete(path(`/uploads/${id}`)).expect(409);
    await site.agent.post(path(`/uploads/${id}/stop`)).expect(409);
    await site.agent.get(path('/uploads/999999')).expect(404);
    await site.agent.delete(path('/uploads/999999')).expect(404);
  });

  it('is withdrawn, once', async () => {
    const { id } = await site.upload(csv);
    await site.withdraw(id);
    expect(await site.get<Upload>(`/uploads/${id}`)).toMatchObject({
      status: 'withdrawn',
      withdrawing: false,
    });
    await site.agent.delete(path(`/uploads/${id}`)).expect(409);
  });

  it('is listed newest first', async () => {
    const uploads = await site.get<Upload[]>('/uploads');
    const ids = uploads.map(({ id }) => id);
    expect(ids).toEqual([...ids].sort((a, b) => b - a));
    expect(uploads.length).toBeGreaterThan(3);
  });
});

describe('a preview through the API', () => {
  it('shows the guess and the first rows, and keeps nothing', async () => {
    const before = await site.get<Upload[]>('/uploads');
    const answer = await site.agent
      .post(path('/upload-preview'))
      .attach('file', Buffer.from(csv), 'export.csv')
      .expect(200);
    const preview = answer.body as UploadPreview;
    expect(preview).toMatchObject({
      delimiter: ',',
      encoding: 'utf-8',
      header: ['job', 'area', 'start', 'finish'],
      plan: { columns: { started: 'start' } },
    });
    expect(preview.rows.map(({ outcome }) => outcome)).toEqual([
      'accepted',
      'accepted',
      'refused',
      'skipped',
      'refused',
    ]);
    expect(await site.get<Upload[]>('/uploads')).toEqual(before);
  });

  it('follows the plan that is given, and says what does not fit', async () => {
    const send = (columns: object) =>
      site.agent
        .post(path('/upload-preview'))
        .field('plan', JSON.stringify({ shape: 'stay', columns, timeZone: 'UTC' }))
        .attach('file', Buffer.from(csv), 'export.csv');
    const read = await send({ job: 'job', area: 'area', finished: 'finish' }).expect(200);
    expect((read.body as UploadPreview).rows[0]).toMatchObject({
      started: null,
      finished: '2026-01-05T09:00:00.000Z',
    });
    const refused = await send({ job: 'job', area: 'station', finished: 'finish' }).expect(400);
    expect((refused.body as { detail: string }).detail).toMatch(/“station”/);
    await send({ job: 'job', area: 'area' }).expect(400);
    await site.agent.post(path('/upload-preview')).field('plan', '1').expect(400);
  });
});
