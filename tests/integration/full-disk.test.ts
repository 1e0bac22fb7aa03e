import { randomBytes } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Upload } from '../../shared/contracts/uploads.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { ways } from '../support/full-disk.ts';
import { makeSite, type TestSite } from '../support/site.ts';
import { derivedAndRebuilt, nothingLeft, readLeftOvers } from '../support/wholeness.ts';

const header = 'job,area,start,finish\n';
const few = `${header}J1,Bench,2026-10-24T01:00Z,2026-10-24T02:00Z\n`;
const stamp = (at: number) => new Date(at).toISOString();
const many =
  header +
  Array.from({ length: 20_000 }, (_, row) => {
    const start = Date.UTC(2026, 0, 1) + row * 600_000;
    return `L${row % 4000},Bench,${stamp(start)},${stamp(start + 3_600_000)}\n`;
  }).join('');

describe.each(Object.entries(ways))('a full disk of the database, %s,', (_, fill) => {
  let test: TestApp;
  let site: TestSite;
  let earlier: Upload;
  beforeAll(async () => {
    test = await startTestApp();
    site = await makeSite(test);
    earlier = await site.upload(few);
  });
  afterAll(() => test.close());

  it('fails an upload that is loaded, with a sentence; once there is room it can be read again', async () => {
    const before = await derivedAndRebuilt(test.migrating, site.id);
    const disk = await fill(test.migrating, 'upload_row');
    const failed = await site.upload(many);
    expect(failed).toMatchObject({
      status: 'failed',
      error: 'storage-full',
      errorDetail:
        'The disk of the database is full. Nothing of it was kept. Tell your administrator; once there is room, read the file again: it need not be sent again.',
    });
    expect(await readLeftOvers(test.migrating)).toEqual(nothingLeft);
    expect(await derivedAndRebuilt(test.migrating, site.id)).toEqual(before);
    expect(await site.get(`/uploads/${earlier.id}`)).toMatchObject({ status: 'loaded' });

    await disk.free();
    await site.agent.post(`/api/sites/${site.id}/uploads/${failed.id}/read-again`).send({});
    await test.settled();
    expect(await site.get(`/uploads/${failed.id}`)).toMatchObject({
      status: 'loaded',
      account: { rowsRead: 20_000, new: 20_000 },
      error: null,
    });
  });

  it('refuses a file that arrives, with a sentence, and keeps nothing of it', async () => {
    const uploads = await site.get('/uploads');
    const disk = await fill(test.migrating, 'upload_chunk');
    const send = () =>
      site.agent.post(`/api/sites/${site.id}/uploads`).attach('file', randomBytes(2_000_000), 'a');
    const answer = await send();
    expect(answer.status).toBe(507);
    expect(answer.body).toMatchObject({
      code: 'storage-full',
      detail:
        'The disk of the database is full. Nothing was kept. Tell your administrator, and try again once there is room.',
    });
    expect(await site.get('/uploads')).toEqual(uploads);
    expect(await readLeftOvers(test.migrating)).toEqual(nothingLeft);
    await disk.free();
    await send().expect(202);
    await test.settled();
  });
});
