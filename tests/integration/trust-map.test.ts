import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { TrustCell, TrustMap } from '../../shared/contracts/trust.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { makeSite, type TestSite } from '../support/site.ts';
import { steadyLog, toCsv, toEventCsv, type LogRow } from '../support/steady-log.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const everything = { from: '2026-01-01T00:00:00Z', to: '2027-01-01T00:00:00Z' };
const readTrust = (site: TestSite, asked: object = everything) =>
  site.get<TrustMap>('/trust', asked);

/** Cells that are not covered, as `area day grade`. */
async function poor(site: TestSite): Promise<string[]> {
  const names = new Map((await site.zones()).map((zone) => [zone.id, zone.name]));
  const { cells } = await readTrust(site);
  return cells
    .filter((cell) => cell.grade !== 'covered')
    .map((cell) => `${names.get(cell.zoneId) ?? ''} ${cell.day} ${cell.grade}`);
}

async function cellOf(site: TestSite, name: string, day: string): Promise<TrustCell> {
  const { id } = await site.zone(name);
  const found = (await readTrust(site)).cells.find(
    (cell) => cell.zoneId === id && cell.day === day,
  );
  if (!found) throw new Error(`There is no cell for ${name} on ${day}.`);
  return found;
}

const on = (day: string, area: string) => (row: LogRow) =>
  row.area === area && row.started.startsWith(day);
/** The last day of the log, Friday 9 October, is a part-day to whom does not know better. */
const lastDay = ['Wash', 'Bench', 'Ship'].map((name) => `${name} 2026-10-09 settling`);

describe('the trust map', () => {
  it('of a site without data is empty', async () => {
    expect(await readTrust(await makeSite(test))).toEqual({
      from: null,
      to: null,
      areas: [],
      cells: [],
      notices: [],
    });
  });

  it('covers every day of a steady log but the one in which it ends', async () => {
    const site = await makeSite(test);
    await site.upload(toCsv(steadyLog()));
    const trust = await readTrust(site);
    expect(trust).toMatchObject({
      from: '2026-08-31T00:00:00.000Z',
      to: '2026-10-10T00:00:00.000Z',
    });
    expect(trust.cells).toHaveLength(3 * 40);
    expect(trust.notices).toEqual([]);
    expect(await poor(site)).toEqual(lastDay);
    expect((await cellOf(site, 'Ship', '2026-10-09')).reasons[0]?.text).toMatch(
      /cannot be learnt from one upload/,
    );
  });

  it('answers for the days that the period touches', async () => {
    const site = await makeSite(test);
    await site.upload(toCsv(steadyLog()));
    const trust = await readTrust(site, {
      from: '2026-09-07T12:00:00Z',
      to: '2026-09-09T00:00:00Z',
    });
    expect(trust).toMatchObject({
      from: '2026-09-07T00:00:00.000Z',
      to: '2026-09-09T00:00:00.000Z',
    });
    expect(new Set(trust.cells.map((cell) => cell.day))).toEqual(
      new Set(['2026-09-07', '2026-09-08']),
    );
  });

  it('counts days in the site’s zone', async () => {
    const site = await makeSite(test, { timeZone: 'America/New_York' });
    await site.upload(toCsv(steadyLog()));
    const { from, cells } = await readTrust(site);
    expect(from).toBe('2026-08-31T04:00:00.000Z');
    expect(cells[0]?.day).toBe('2026-08-31');
  });

  it('finds the day on which one area’s data are missing while the others go on', async () => {
    const site = await makeSite(test);
    const lost = on('2026-10-07', 'Bench');
    await site.upload(toCsv(steadyLog().filter((row) => !lost(row))));
    expect(await poor(site)).toEqual(['Bench 2026-10-07 missing', ...lastDay].sort(byArea));
    expect((await cellOf(site, 'Bench', '2026-10-07')).reasons[0]?.text).toBe(
      'Nothing was recorded here, where 24 starts and finishes are usual on a Wednesday, and other areas went on.',
    );
  });

  it('takes a day on which nothing was recorded anywhere as a holiday, three as missing', async () => {
    const holiday = await makeSite(test);
    await holiday.upload(toCsv(steadyLog().filter((row) => !row.started.startsWith('2026-10-07'))));
    expect(await poor(holiday)).toEqual(lastDay);
    const closed = await makeSite(test);
    await closed.upload(toCsv(steadyLog().filter((row) => !/^2026-10-0[678]/.test(row.started))));
    expect((await poor(closed)).filter((cell) => cell.startsWith('Wash'))).toEqual([
      'Wash 2026-10-06 missing',
      'Wash 2026-10-07 missing',
      'Wash 2026-10-08 missing',
      'Wash 2026-10-09 settling',
    ]);
  });

  it('finds days that no upload speaks for, and the feed that is behind', async () => {
    const site = await makeSite(test);
    const log = steadyLog();
    const isLate = (row: LogRow) => row.area === 'Ship';
    await site.upload(toCsv(log.filter((row) => !isLate(row))));
    await site.upload(toCsv(log.filter((row) => isLate(row) && row.started < '2026-10-07')));
    expect((await poor(site)).filter((cell) => cell.startsWith('Ship'))).toEqual([
      'Ship 2026-10-06 settling',
      'Ship 2026-10-07 missing',
      'Ship 2026-10-08 missing',
      'Ship 2026-10-09 missing',
    ]);
    const { notices } = await readTrust(site);
    const ship = await site.zone('Ship');
    expect(notices).toMatchObject([{ kind: 'area-behind', zoneIds: [ship.id] }]);
    expect(notices[0]?.text).toMatch(
      /^The data of Ship end 2\.9 days before those of the other areas; about 48 /,
    );
  });

  it('leaves an area out once it is in use no more', async () => {
    const site = await makeSite(test);
    await site.upload(
      toCsv(steadyLog().filter((row) => row.area !== 'Ship' || row.started < '2026-09-08')),
    );
    const ship = await site.zone('Ship');
    const { cells, notices } = await readTrust(site);
    expect(cells.findLast((cell) => cell.zoneId === ship.id)?.day).toBe('2026-09-07');
    expect(notices).toEqual([]);
  });

  it('learns from earlier uploads how long finishes are being posted', async () => {
    const site = await makeSite(test);
    const log = steadyLog();
    /** As exported at the end of a day: of the last two days every other finish is not posted yet. */
    const exported = (from: string, until: string, late: readonly string[]) =>
      log
        .filter((row) => row.started >= from && row.started < until)
        .map((row, index) =>
          row.area === 'Ship' && index % 2 === 1 && late.some((day) => row.started.startsWith(day))
            ? { ...row, finished: '' }
            : row,
        );
    await site.upload(toCsv(exported('', '2026-09-26', ['2026-09-24', '2026-09-25'])));
    await site.upload(toCsv(exported('2026-09-14', '2026-10-10', ['2026-10-08', '2026-10-09'])));
    expect(await poor(site)).toEqual(['Ship 2026-10-08 settling', ...lastDay].sort(byArea));
    expect((await cellOf(site, 'Ship', '2026-10-08')).reasons[0]?.text).toMatch(
      /^Finishes are still being posted: after 1 day (4|5)\d % of them were there, as 1 earlier upload shows/,
    );
    expect((await cellOf(site, 'Wash', '2026-10-09')).reasons).toEqual([
      { grade: 'settling', text: 'The data end within this day.' },
    ]);
  });

  it('takes a finish as posted when it was first told, though events tell it again, or a period is replaced', async () => {
    const half = (from: string, until: string) =>
      steadyLog().filter((row) => row.started >= from && row.started < until);
    const events = await makeSite(test);
    await events.upload(toEventCsv(half('', '2026-09-26')), eventPlan);
    await events.upload(toEventCsv(half('2026-09-14', '2026-10-10')), eventPlan);
    expect(await poor(events)).toEqual(lastDay);
    const replaced = await makeSite(test);
    await replaced.upload(toCsv(half('', '2026-09-26')));
    await replaced.upload(toCsv(half('2026-09-14', '2026-10-10')), {
      shape: 'stay',
      columns: { job: 'job', area: 'area', started: 'started', finished: 'finished' },
      mode: 'replace-period',
      timeZone: 'UTC',
    });
    expect(await poor(replaced)).toEqual(lastDay);
  });

  it('finds the day whose work was posted at the end of the shift, and leaves batches alone', async () => {
    const site = await makeSite(test);
    await site.upload(
      toCsv(
        steadyLog().map((row) => {
          if (on('2026-10-07', 'Ship')(row)) return { ...row, finished: '2026-10-07T22:00:00Z' };
          if (!on('2026-10-06', 'Ship')(row)) return row;
          return { ...row, started: '2026-10-06T20:00:01Z', finished: '2026-10-06T22:00:01Z' };
        }),
      ),
    );
    expect(await poor(site)).toEqual(['Ship 2026-10-07 coarse', ...lastDay].sort(byArea));
    expect((await cellOf(site, 'Ship', '2026-10-07')).reasons[0]?.text).toBe(
      '12 of 12 finishes carry one and the same moment, as where a shift posts its work at its end, or only dates are told.',
    );
  });

  it('finds whole hours where the work takes less', async () => {
    const site = await makeSite(test);
    const hour = (at: string) => `${at.slice(0, 13)}:00:00Z`;
    await site.upload(
      toCsv(
        steadyLog().map((row) =>
          on('2026-10-07', 'Wash')(row)
            ? { ...row, started: hour(row.started), finished: hour(row.finished) }
            : row,
        ),
      ),
    );
    const cell = await cellOf(site, 'Wash', '2026-10-07');
    expect(cell).toMatchObject({ grade: 'coarse' });
    expect(cell.reasons[0]?.text).toMatch(/^12 of 12 finishes are told in whole hours/);
  });

  it('finds the day on which finishes were inferred', async () => {
    const site = await makeSite(test);
    await site.upload(
      toCsv(
        steadyLog().map((row, index) =>
          on('2026-10-07', 'Wash')(row) && index % 2 === 0 ? { ...row, finished: '' } : row,
        ),
      ),
    );
    expect(await poor(site)).toEqual(['Wash 2026-10-07 inferred', ...lastDay].sort(byArea));
    expect((await cellOf(site, 'Wash', '2026-10-07')).reasons[0]?.text).toMatch(
      /^The finish of \d+ of 12 stays was not recorded/,
    );
  });

  it('says of a log with finishes only that it is inferred', async () => {
    const site = await makeSite(test);
    await site.upload(toCsv(steadyLog().map((row) => ({ ...row, started: '' }))));
    expect(await cellOf(site, 'Bench', '2026-09-30')).toMatchObject({ grade: 'inferred' });
  });

  it('finds a clock that is behind, by how much, and from how many jobs', async () => {
    const site = await makeSite(test);
    await site.upload(
      toCsv(steadyLog().map((row) => (row.area === 'Ship' ? movedBy(row, -20 * 60_000) : row))),
    );
    const [bench, ship] = [await site.zone('Bench'), await site.zone('Ship')];
    const { notices } = await readTrust(site);
    expect(notices).toMatchObject([{ kind: 'clock-offset', zoneIds: [bench.id, ship.id] }]);
    // Jobs go from one area to the next within one to four minutes.
    expect(notices[0]?.seconds).toBeGreaterThan(18 * 60);
    expect(notices[0]?.seconds).toBeLessThanOrEqual(19 * 60);
    expect(notices[0]?.text).toMatch(
      /^The clock of Ship is about 19 min behind that of Bench: \d+ of \d+ jobs/,
    );
  });

  it('finds an export that was filtered by finish date, and no fault with the whole of it', async () => {
    const log = steadyLog({ jobsPerDay: 48, aroundTheClock: true, hoursInArea: 20 });
    const until = '2026-10-08T12:00:00Z';
    const filtered = await makeSite(test);
    await filtered.upload(toCsv(log.filter((row) => row.finished <= until)));
    expect((await readTrust(filtered)).notices).toMatchObject([
      { kind: 'finish-filtered', zoneIds: [], seconds: null },
    ]);
    const whole = await makeSite(test);
    const asExported = log
      .filter((row) => row.started <= until)
      .map((row) => ({ ...row, finished: row.finished <= until ? row.finished : '' }));
    await whole.upload(toCsv(asExported));
    expect((await readTrust(whole)).notices).toEqual([]);
  });

  it('is after a withdrawal as if the upload had never come', async () => {
    const site = await makeSite(test);
    await site.upload(toCsv(steadyLog().filter((row) => row.started < '2026-10-01')));
    const before = await readTrust(site);
    const second = await site.upload(
      toCsv(steadyLog().filter((row) => row.started >= '2026-09-20')),
    );
    expect(await readTrust(site)).not.toEqual(before);
    await site.withdraw(second.id);
    expect(await readTrust(site)).toEqual(before);
  });

  it.each(['stay', 'event'])(
    'grades merged spellings as the one area, told by a row per %s',
    async (shape) => {
      const site = await makeSite(test);
      const respelled = (row: LogRow) =>
        row.area === 'Ship' && row.started >= '2026-09-21' ? { ...row, area: 'Shipping' } : row;
      const rows = steadyLog().map(respelled);
      if (shape === 'event') await site.upload(toEventCsv(rows), eventPlan);
      else await site.upload(toCsv(rows));
      expect((await poor(site)).length).toBeGreaterThan(lastDay.length);
      const [target, source] = [await site.zone('Ship'), await site.zone('Shipping')];
      await site.agent
        .post(`/api/sites/${site.id}/area-moves`)
        .send({ areaId: source.id, targetAreaId: target.id, from: null })
        .expect(201);
      await test.settled();
      expect(await poor(site)).toEqual(lastDay);
    },
  );

  it.each([
    [{ from: everything.to, to: everything.from }, 'from'],
    [{ from: 'yesterday', to: everything.to }, 'from'],
    [{ from: everything.from }, 'to'],
  ])('refuses %j, naming %s', async (asked, field) => {
    const site = await makeSite(test);
    const refused = await site.agent.get(`/api/sites/${site.id}/trust`).query(asked).expect(400);
    const { errors } = refused.body as { errors: { field: string }[] };
    expect(errors.map((error) => error.field)).toContain(field);
  });
});

const eventPlan = {
  shape: 'event',
  columns: { job: 'job', area: 'area', event: 'event', time: 'time' },
  eventWords: { started: ['in'], finished: ['out'] },
  timeZone: 'UTC',
};

const order = ['Wash', 'Bench', 'Ship'];
const byArea = (one: string, other: string) =>
  order.indexOf(one.split(' ')[0] ?? '') - order.indexOf(other.split(' ')[0] ?? '') ||
  (one < other ? -1 : 1);

function movedBy(row: LogRow, by: number): LogRow {
  const moved = (at: string) => new Date(Date.parse(at) + by).toISOString();
  return { ...row, started: moved(row.started), finished: moved(row.finished) };
}
