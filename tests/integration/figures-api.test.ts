import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { InsideStay } from '../../shared/contracts/figures.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { makeSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const day = (hour: number) => new Date(Date.UTC(2026, 9, 5, hour)).toISOString();
const csv = (header: string, ...rows: string[]) => [header, ...rows, ''].join('\n');
const stays = (...rows: [string, string, number | null, number | null, number | null][]) =>
  csv(
    'job,area,arrived,started,finished',
    ...rows.map((row) =>
      row.map((cell) => (typeof cell === 'number' ? day(cell) : (cell ?? ''))).join(','),
    ),
  );

interface Job {
  records: {
    areaName: string;
    entered: string | null;
    left: string | null;
    finishInferred: boolean;
    queueSeconds: number | null;
    processSeconds: number | null;
    pass: number;
  }[];
  stays: {
    kind: string;
    entered: string;
    left: string | null;
    processSeconds: number | null;
    queueSeconds: number | null;
  }[];
}

describe('what a log does not hold', () => {
  it('with finishes only, entered is the finish before, and the split is unknown', async () => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Wash', null, null, 2], ['J', 'Bench', null, null, 6]));
    const job = await site.get<Job>('/jobs/J');
    // The first finish has nothing before it: a record, and no stay anywhere.
    expect(job.records).toMatchObject([
      { areaName: 'Wash', entered: null },
      {
        areaName: 'Bench',
        entered: day(2),
        left: day(6),
        queueSeconds: null,
        processSeconds: null,
      },
    ]);
    expect(job.stays.map((stay) => stay.kind)).toEqual(['area', 'site']);
  });

  it('an arrival without a start is a job that waits', async () => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Bench', 1, null, null], ['K', 'Bench', 2, 3, 5]));
    const { id } = await site.zone('Bench');
    expect(await site.summary(id, day(0), day(4))).toMatchObject({ wipEnd: 2, inProcessEnd: 1 });
  });

  it('a lost finish is taken as the next start, never as process time, or left open by setting', async () => {
    const rows = stays(['J', 'Wash', null, 1, null], ['J', 'Bench', null, 4, 6]);
    const inferring = await makeSite(test);
    await inferring.upload(rows);
    expect((await inferring.get<Job>('/jobs/J')).records[0]).toMatchObject({
      left: day(4),
      finishInferred: true,
      processSeconds: null,
    });
    const wash = await inferring.zone('Wash');
    expect(await inferring.summary(wash.id, day(0), day(6))).toMatchObject({
      inferredDepartures: 1,
      inProcessMean: 0,
      processMeanSeconds: null,
    });
    const open = await makeSite(test, { lostFinish: 'leave-open' });
    await open.upload(rows);
    expect((await open.get<Job>('/jobs/J')).records[0]).toMatchObject({ left: null });
  });

  it('changing the setting derives everything again', async () => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Wash', null, 1, null], ['J', 'Bench', null, 4, 6]));
    await site.agent.patch(`/api/sites/${site.id}`).send({ lostFinish: 'leave-open' }).expect(200);
    await test.settled();
    expect((await site.get<Job>('/jobs/J')).records[0]).toMatchObject({ left: null });
    expect(await site.get('')).toMatchObject({ busy: false });
  });
});

describe('zones', () => {
  const rows = stays(
    ['J', 'Wash', null, 1, 2],
    ['J', 'Bench', null, 3, 5],
    ['J', 'Oven', null, 4, 7],
    ['J', 'Ship', null, 8, 9],
    ['J', 'Bench', null, 10, 11],
  );

  it('a loop has a stay for each time that a job comes in; process time is the union', async () => {
    const site = await makeSite(test);
    await site.upload(rows);
    const [bench, oven] = [await site.zone('Bench'), await site.zone('Oven')];
    const made = await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'loop', name: 'Hot loop', areaIds: [bench.id, oven.id] })
      .expect(201);
    expect((made.body as Zone).state).toBe('deriving');
    await test.settled();
    const loop = await site.zone('Hot loop');
    expect(loop.state).toBe('ready');
    const { stays: found } = await site.get<Job>('/jobs/J');
    expect(found.filter((stay) => stay.kind === 'loop')).toMatchObject([
      { entered: day(2), left: day(7), processSeconds: 4 * 3600, queueSeconds: 3600 },
      { entered: day(9), left: day(11), processSeconds: 3600, queueSeconds: 3600 },
    ]);
    expect(await site.summary(loop.id, day(0), day(12))).toMatchObject({
      arrivals: 2,
      departures: 2,
      wipPeak: 1,
    });
  });

  it('that count from the start leave out the waiting before it', async () => {
    const site = await makeSite(test);
    await site.upload(rows);
    const { id } = await site.zone('Ship');
    expect(await site.summary(id, day(0), day(12))).toMatchObject({ flowMeanSeconds: 2 * 3600 });
    await site.agent
      .patch(`/api/sites/${site.id}/zones/${id}`)
      .send({ countsFrom: 'start' })
      .expect(200);
    await test.settled();
    expect(await site.summary(id, day(0), day(12))).toMatchObject({
      flowMeanSeconds: 3600,
      queueMeanSeconds: 0,
    });
  });

  it('know the share of their servers that is occupied, where servers are declared', async () => {
    const site = await makeSite(test);
    await site.upload(rows);
    const { id } = await site.zone('Oven');
    expect((await site.summary(id, day(0), day(12))).utilisation).toBeNull();
    await site.agent.patch(`/api/sites/${site.id}/zones/${id}`).send({ servers: 2 }).expect(200);
    const summary = await site.summary(id, day(0), day(12));
    expect(summary.utilisation).toBeCloseTo(3 / (2 * 12), 12);
  });

  it('a job key that comes back after the idle gap is a new pass', async () => {
    const site = await makeSite(test);
    const before = -24 * 100;
    await site.upload(stays(['J', 'Wash', null, before, before + 1], ['J', 'Bench', null, 1, 2]));
    const job = await site.get<Job>('/jobs/J');
    expect(job.records.map((record) => record.pass)).toEqual([1, 2]);
    // Not since the finish of the pass before: it was not waiting for the bench all that time.
    expect(job.records[1]?.entered).toBe(day(1));
    expect(job.stays.filter((stay) => stay.kind === 'site')).toHaveLength(2);
  });
});

describe('units', () => {
  it('weigh levels, arrivals and departures by quantity; flow times stay those of jobs', async () => {
    const site = await makeSite(test);
    await site.upload(
      csv(
        'job,area,started,finished,quantity',
        `J,Bench,${day(0)},${day(2)},4`,
        `K,Bench,${day(1)},${day(4)},2.5`,
        `L,Bench,${day(3)},,`,
      ),
    );
    const { id } = await site.zone('Bench');
    const summary = await site.summary(id, day(0), day(4), { unit: 'units' });
    expect(summary).toMatchObject({
      wipPeak: 6.5,
      arrivals: 7.5,
      departures: 4,
      wipEnd: 3.5,
      flowMeanSeconds: 7200,
      books: { wipStart: 0, arrivals: 7.5, departures: 4, wipEnd: 3.5, balance: true },
    });
    expect(summary.wipMean).toBeCloseTo((4 * 2 + 2.5 * 3 + 1) / 4, 12);
    expect(summary.littlesLaw.wipMean).toBeCloseTo((2 + 3 + 1) / 4, 12);
  });

  it('are jobs where the log tells no quantity', async () => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Bench', null, 1, 3]));
    const { id } = await site.zone('Bench');
    expect(await site.summary(id, day(0), day(4), { unit: 'units' })).toMatchObject({
      wipMean: 0.5,
    });
  });
});

describe('those inside', () => {
  it('come longest first, page by page, each once', async () => {
    const site = await makeSite(test);
    const jobs = Array.from({ length: 25 }, (_, index) => `J${String(index).padStart(2, '0')}`);
    // Pairs enter together, so that places in the list are told apart by the key.
    await site.upload(
      stays(
        ...jobs.map(
          (job, index) =>
            [job, 'Bench', null, Math.floor(index / 2), null] as [
              string,
              string,
              null,
              number,
              null,
            ],
        ),
      ),
    );
    const { id } = await site.zone('Bench');
    const seen: string[] = [];
    let cursor: string | null = null;
    do {
      const page: { total: number; stays: InsideStay[]; nextCursor: string | null } =
        await site.get(`/zones/${id}/inside`, {
          at: day(20),
          limit: 7,
          ...(cursor ? { cursor } : {}),
        });
      expect(page.total).toBe(25);
      seen.push(...page.stays.map((stay) => stay.jobKey));
      cursor = page.nextCursor;
    } while (cursor);
    expect(seen).toEqual(jobs);
  });
});

describe('wrong input', () => {
  it.each([
    ['summary', { from: day(4), to: day(4) }, 'from'],
    ['summary', { from: '2026-10-05', to: day(4) }, 'from'],
    ['summary', { from: day(1), to: day(4), hours: 'working' }, 'hours'],
    ['series', { from: day(1), to: day(4), step: 'minute' }, 'step'],
    ['series', { from: '1990-01-01T00:00:00Z', to: day(4), step: 'hour' }, 'step'],
    ['inside', { at: day(1), limit: 0 }, 'limit'],
    ['inside', { at: day(1), cursor: 'nonsense' }, 'cursor'],
  ])('%s with %j is refused, naming %s', async (call, query, field) => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Bench', null, 1, 3]));
    const { id } = await site.zone('Bench');
    const response = await site.agent
      .get(`/api/sites/${site.id}/zones/${id}/${call}`)
      .query(query)
      .expect(400);
    expect(
      (response.body as { errors: { field: string }[] }).errors.map((error) => error.field),
    ).toContain(field);
  });

  it('a zone, an upload or a job that is none is not found', async () => {
    const site = await makeSite(test);
    for (const path of [
      '/zones/999999/summary',
      '/zones/999999/series',
      '/uploads/999999',
      '/jobs/NONE',
      '/zones/abc/summary',
    ])
      await site.agent
        .get(`/api/sites/${site.id}${path}`)
        .query({ from: day(0), to: day(1) })
        .expect(404);
  });
});

describe('a long series', () => {
  it('refuses levels of every zone over more years than a picture holds', async () => {
    const site = await makeSite(test);
    const asked = { from: '1900-01-01T00:00:00Z', to: '1941-01-01T00:00:00Z' };
    const path = `/api/sites/${site.id}/floor/levels`;
    const refused = await site.agent.get(path).query(asked).expect(400);
    expect(refused.body).toMatchObject({ code: 'invalid-input', errors: [{ field: 'to' }] });
  });

  it('answers at least 10,000 points', async () => {
    const site = await makeSite(test);
    await site.upload(stays(['J', 'Bench', null, 1, 3]));
    const { id } = await site.zone('Bench');
    const { points } = await site.get<{ points: unknown[] }>(`/zones/${id}/series`, {
      from: '2025-09-01T00:00:00Z',
      to: '2026-10-23T00:00:00Z',
      step: 'hour',
    });
    expect(points.length).toBe(417 * 24);
  });
});
