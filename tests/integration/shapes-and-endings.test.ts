import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { withTenant } from '../../server/db/tenant.ts';
import { readDerived } from '../../server/flow/derived-state.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { asCsv, logArbitrary } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const lowmoor = 1;
const state = (site: TestSite) =>
  withTenant(test.db, lowmoor, (tx) => readDerived(tx, lowmoor, site.id));

interface Job {
  records: { areaName: string; started: string | null; finished: string | null; ending: string }[];
  voided: { line: number; voidedBy: number }[];
}
const jobOf = (site: TestSite, key: string) => site.get<Job>(`/jobs/${key}`);

describe('a row per job', () => {
  const text = [
    'Job;Cleaning start;Cleaning finish;Burn-in start;Burn-in finish;Qty;Status',
    'J1;24.10.2026 08:00;24.10.2026 09:00;24.10.2026 10:00;;1,5;',
    'J2;24.10.2026 08:30;24.10.2026 08:00;;;2;',
    'J3;;;;;1;',
    '',
    ';24.10.2026 08:00;;;;;',
    'J4;24.10.2026 08:00;24.10.2026 09:00;24.10.2026 10:00;24.10.2026 11:00;3;scrapped',
    '',
  ].join('\n');

  it('is read area by area, and each filled pair is a row of the account', async () => {
    const site = await makeSite(test);
    const { plan, account } = await site.upload(text);
    expect(plan).toMatchObject({
      shape: 'job',
      delimiter: ';',
      decimalSign: ',',
      dateOrder: 'day-first',
      statusWords: { scrapped: ['scrapped'] },
      areas: [
        { area: 'Cleaning', started: 'Cleaning start', finished: 'Cleaning finish' },
        { area: 'Burn-in', started: 'Burn-in start', finished: 'Burn-in finish' },
      ],
    });
    expect(account).toMatchObject({
      rowsRead: 8,
      new: 4,
      skipped: 1,
      refused: 3,
      refusedBy: { 'finish-before-start': 1, 'no-time': 1, 'missing-job': 1 },
    });
    const { records } = await jobOf(site, 'J1');
    expect(records.map(({ areaName, finished }) => [areaName, finished])).toEqual([
      ['Cleaning', '2026-10-24T09:00:00.000Z'],
      ['Burn-in', null],
    ]);
  });

  it('with an id of its own gives each of its stays an id, by which a changed start is a correction', async () => {
    const site = await makeSite(test);
    const file = (start: string) =>
      `Id,Job,Wash start,Wash finish,Bench start,Bench finish\n7,J1,${start},2026-10-24T09:00Z,2026-10-24T10:00Z,2026-10-24T11:00Z\n`;
    const plan = {
      shape: 'job',
      columns: { job: 'Job', record: 'Id' },
      areas: [
        { area: 'Wash', started: 'Wash start', finished: 'Wash finish' },
        { area: 'Bench', started: 'Bench start', finished: 'Bench finish' },
      ],
      timeZone: 'UTC',
    };
    await site.upload(file('2026-10-24T08:00Z'), plan);
    const { account } = await site.upload(file('2026-10-24T08:30Z'), plan);
    expect(account).toMatchObject({ rowsRead: 2, same: 1, correcting: 1, new: 0 });
    expect((await jobOf(site, 'J1')).records).toHaveLength(2);
  });
});

describe('a status that scraps or cancels', () => {
  it('ends the stay and is counted apart from good departures', async () => {
    const site = await makeSite(test);
    const { account } = await site.upload(
      [
        'job,area,start,finish,status',
        'J1,Bench,2026-10-24T08:00Z,2026-10-24T09:00Z,done',
        'J2,Bench,2026-10-24T08:00Z,2026-10-24T10:00Z,Scrapped',
        'J3,Bench,2026-10-24T08:00Z,,Cancelled',
        'J4,Bench,2026-10-24T08:00Z,,',
        '',
      ].join('\n'),
    );
    expect(account).toMatchObject({ new: 4, warnings: { 'no-finish': 2, 'finish-inferred': 1 } });
    const bench = await site.zone('Bench');
    const period = ['2026-10-24T00:00:00Z', '2026-10-25T00:00:00Z'] as const;
    expect(await site.summary(bench.id, ...period)).toMatchObject({
      arrivals: 4,
      departures: 3,
      scrapped: 1,
      cancelled: 1,
      wipEnd: 1,
    });
    const whole = (await site.zones()).find(({ kind }) => kind === 'site');
    const { points } = await site.get<{ points: object[] }>(`/zones/${whole?.id}/series`, {
      from: period[0],
      to: period[1],
      step: 'day',
    });
    expect(points).toMatchObject([{ departures: 3, scrapped: 1, cancelled: 1 }]);
    expect((await jobOf(site, 'J3')).records).toMatchObject([{ ending: 'cancelled' }]);
  });
});

describe('stays that lie over each other', () => {
  it('are warned of, and so are finishes that are inferred', async () => {
    const site = await makeSite(test);
    const { account } = await site.upload(
      [
        'job,area,start,finish',
        'J1,Wash,2026-10-24T08:00Z,2026-10-24T10:00Z',
        'J1,Bench,2026-10-24T09:00Z,2026-10-24T11:00Z',
        'J2,Wash,2026-10-24T08:00Z,',
        'J2,Bench,2026-10-24T09:00Z,2026-10-24T11:00Z',
        '',
      ].join('\n'),
    );
    expect(account.warnings).toEqual({
      'no-finish': 1,
      'finish-inferred': 1,
      'two-stays-at-once': 1,
    });
  });
});

describe('a file that replaces its period', () => {
  const mode = 'replace-period';
  const columns = { job: 'job', area: 'area', started: 'start', finished: 'finish' };
  const plan = { shape: 'stay', columns, timeZone: 'UTC' };
  const before = [
    'job,area,start,finish',
    'J1,Bench,2026-10-24T08:00Z,2026-10-24T09:00Z',
    'J2,Bench,2026-10-24T10:00Z,2026-10-24T11:00Z',
    'J3,Wash,2026-10-24T10:00Z,2026-10-24T11:00Z',
    'J4,Bench,2026-10-25T08:00Z,2026-10-25T09:00Z',
    '',
  ].join('\n');
  const truth = [
    'job,area,start,finish',
    'J1,Bench,2026-10-24T08:00Z,2026-10-24T09:30Z',
    'J5,Bench,2026-10-24T12:00Z,2026-10-24T13:00Z',
    '',
  ].join('\n');

  it('voids the rows of before in its areas that it does not carry, with history', async () => {
    const site = await makeSite(test);
    const first = await site.upload(before, plan);
    const { id, account } = await site.upload(truth, { ...plan, mode });
    expect(account).toMatchObject({ rowsRead: 2, new: 1, correcting: 1, voided: 1 });
    const job = await jobOf(site, 'J2');
    expect(job.records).toEqual([]);
    expect(job.voided).toMatchObject([{ uploadId: first.id, line: 3, voidedBy: id }]);
    expect((await jobOf(site, 'J3')).records).toHaveLength(1);
    expect((await jobOf(site, 'J4')).records).toHaveLength(1);
  });

  it('is alone said to void them, not an upload that comes after it', async () => {
    const site = await makeSite(test);
    await site.upload(before, plan);
    await site.upload(truth, { ...plan, mode });
    const { account } = await site.upload(before.split('\n').slice(0, 3).join('\n'), plan);
    expect(account).toMatchObject({ rowsRead: 2, voided: 0 });
    const other = await site.upload('job,area,start,finish\nJ2,Wash,2026-10-24T12:00Z,\n', plan);
    expect(other.account).toMatchObject({ new: 1, voided: 0 });
  });

  it('and is withdrawn leaves what was before', async () => {
    const site = await makeSite(test);
    await site.upload(before, plan);
    const standing = await state(site);
    const { id } = await site.upload(truth, { ...plan, mode });
    expect(await state(site)).not.toEqual(standing);
    await site.withdraw(id);
    expect(await state(site)).toEqual(standing);
  });

  it('over whatever was loaded gives the stays of its own log where it covers all of it', async () => {
    const start = Date.parse('2026-10-23T00:00:00Z');
    await fc.assert(
      fc.asyncProperty(logArbitrary(start), logArbitrary(start), async (old, now) => {
        // Both ends of the span and every area are in the file.
        const frame = ['Wash', 'Bench', 'Oven'].flatMap((area, index) => [
          { job: `F${index}`, area, arrived: null, started: start - 1000, finished: start },
          {
            job: `G${index}`,
            area,
            arrived: null,
            started: start + 5 * 86_400_000,
            finished: start + 5 * 86_400_000,
          },
        ]);
        const withTimes = {
          ...plan,
          columns: { ...columns, started: 'started', finished: 'finished', arrived: 'arrived' },
        };
        // What the file carries of before would be merged with it.
        const apart = old.filter(
          (row) => !now.some((each) => each.job === row.job && each.area === row.area),
        );
        const replaced = await makeSite(test, { timeZone: 'Europe/Dublin' });
        if (apart.length > 0) await replaced.upload(asCsv(apart), withTimes);
        await replaced.upload(asCsv([...frame, ...now]), { ...withTimes, mode });
        const alone = await makeSite(test, { timeZone: 'Europe/Dublin' });
        await alone.upload(asCsv([...frame, ...now]), withTimes);
        for (const name of ['Wash', 'Bench', 'Oven']) {
          const query = { from: '2026-10-20T00:00:00Z', to: '2026-11-02T00:00:00Z', step: 'hour' };
          const series = async (site: TestSite) =>
            (
              await site.get<{ points: object[] }>(
                `/zones/${(await site.zone(name)).id}/series`,
                query,
              )
            ).points;
          expect(await series(replaced)).toEqual(await series(alone));
        }
      }),
      { numRuns: 6, seed: 20_261_204 },
    );
  });
});

describe('an upload that is read again', () => {
  const refused =
    'job,area,start,finish\nJ1,Bench,2026-10-24T08:00Z,\nJ2,Oven,2026-10-24T09:00Z,\n';
  const plan = {
    shape: 'stay',
    columns: { job: 'job', area: 'area', started: 'start', finished: 'finish' },
    timeZone: 'UTC',
    unknownAreas: 'refuse',
  };
  const again = async (site: TestSite, id: number, body: object) => {
    await site.agent.post(`/api/sites/${site.id}/uploads/${id}/read-again`).send(body).expect(202);
    await test.settled();
    return site.get<{ status: string; error: string; account: object }>(`/uploads/${id}`);
  };

  it('takes rows that were refused, once their areas are known', async () => {
    const site = await makeSite(test);
    await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'area', name: 'Bench' })
      .expect(201);
    const { id, account } = await site.upload(refused, plan);
    expect(account).toMatchObject({ new: 1, refused: 1, refusedBy: { 'unknown-area': 1 } });
    await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'area', name: 'Oven' })
      .expect(201);
    expect(await again(site, id, {})).toMatchObject({
      status: 'loaded',
      account: { rowsRead: 2, new: 2, refused: 0 },
    });
    const csv = await site.agent.get(`/api/sites/${site.id}/uploads/${id}/refused.csv`).expect(200);
    expect(csv.text.trim().split('\n')).toHaveLength(1);
  });

  it('by another plan is as if it had been read by it at first', async () => {
    const site = await makeSite(test);
    const other = await makeSite(test);
    const { id } = await site.upload(refused, { ...plan, unknownAreas: 'add' });
    const columns = { job: 'job', area: 'area', finished: 'start' };
    await again(site, id, { plan: { ...plan, unknownAreas: 'add', columns } });
    await other.upload(refused, { ...plan, unknownAreas: 'add', columns });
    const records = async (each: TestSite) =>
      (await jobOf(each, 'J1')).records.map(({ finished }) => finished);
    expect(await records(site)).toEqual(await records(other));
  });

  it('by a plan that does not fit stands as it was, and says why', async () => {
    const site = await makeSite(test);
    const { id } = await site.upload(refused, { ...plan, unknownAreas: 'add' });
    const standing = await state(site);
    const read = await again(site, id, {
      plan: { ...plan, columns: { ...plan.columns, job: 'ticket' } },
    });
    expect(read).toMatchObject({ status: 'loaded', error: 'no-such-column', account: { new: 2 } });
    expect(await state(site)).toEqual(standing);
  });
});
