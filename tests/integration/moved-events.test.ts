import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Areas } from '../../shared/contracts/areas.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { eventPlan, eventsAsCsv, inOrder, recordsOf } from '../support/event-log.ts';
import { pairByRule, type OracleEvent, type PairedStay } from '../support/event-oracle.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

async function move(site: TestSite, from: number | null): Promise<number> {
  const { areas } = await site.get<Areas>('/areas');
  const idOf = (name: string) => areas.find((each) => each.name === name)?.id;
  const made = await site.agent
    .post(`/api/sites/${site.id}/area-moves`)
    .send({
      areaId: idOf('Wash'),
      targetAreaId: idOf('Bench'),
      from: from === null ? null : new Date(from).toISOString(),
    })
    .expect(201);
  await test.settled();
  return (made.body as { id: number }).id;
}

async function undo(site: TestSite, moveId: number): Promise<void> {
  await site.agent.delete(`/api/sites/${site.id}/area-moves/${moveId}`).expect(204);
  await test.settled();
}

const start = Date.parse('2026-10-24T06:00:00Z');
const hour = 3_600_000;
const event = fc.record({
  job: fc.constantFrom('J1', 'J2'),
  area: fc.constantFrom('Wash', 'Bench'),
  event: fc.constantFrom('arrived', 'started', 'started', 'finished', 'finished'),
  at: fc.integer({ min: 0, max: 9 }).map((hours) => start + hours * hour),
}) as fc.Arbitrary<OracleEvent>;
/** Both areas are named from the first upload on. */
const named: OracleEvent[] = ['Wash', 'Bench'].map((area) => ({
  job: 'J0',
  area,
  event: 'started',
  at: start,
}));
const uploads = fc.tuple(
  fc.array(event, { maxLength: 16 }).map((events) => [...named, ...events]),
  fc.array(event, { minLength: 1, maxLength: 12 }),
);

describe('events of a merged area', () => {
  it('are paired with those of the other, before and after an upload, and as told when it is undone', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, async ([one, other]) => {
        const site = await makeSite(test);
        const merged = (events: readonly OracleEvent[]) =>
          inOrder(pairByRule(events.map((each) => ({ ...each, area: 'Bench' }))));
        await site.upload(eventsAsCsv(one), eventPlan);
        const id = await move(site, null);
        expect(await recordsOf(test, site)).toEqual(merged(one));
        await site.upload(eventsAsCsv(other), eventPlan);
        expect(await recordsOf(test, site)).toEqual(merged([...one, ...other]));
        await undo(site, id);
        expect(await recordsOf(test, site)).toEqual(inOrder(pairByRule([...one, ...other])));
      }),
      { numRuns: 20, seed: 20_261_208 },
    );
  });
});

describe('events of an area that is moved from a moment on', () => {
  const from = start + 5 * hour;
  const about = (stay: PairedStay) => stay.started ?? stay.arrived ?? stay.finished ?? 0;
  /** Paired as they were told; then each stay goes, whole, by when it began. */
  const moved = (events: readonly OracleEvent[]) =>
    pairByRule(events).map((stay) =>
      stay.area === 'Wash' && about(stay) >= from ? { ...stay, area: 'Bench' } : stay,
    );
  const isClear = (stays: readonly PairedStay[]) =>
    new Set(stays.map((stay) => `${stay.job} ${stay.area} ${about(stay)}`)).size === stays.length;

  it('stay with the start that they belong to', async () => {
    let spanning = 0;
    await fc.assert(
      fc.asyncProperty(uploads, async ([one, other]) => {
        const expected = moved([...one, ...other]);
        // Two stays of a job that begin together in one area are told as one.
        fc.pre(isClear(expected));
        spanning += expected.filter(
          (stay) => stay.area === 'Wash' && (stay.finished ?? 0) >= from,
        ).length;
        const site = await makeSite(test);
        await site.upload(eventsAsCsv(one), eventPlan);
        const id = await move(site, from);
        await site.upload(eventsAsCsv(other), eventPlan);
        expect(await recordsOf(test, site)).toEqual(inOrder(expected));
        await undo(site, id);
        expect(await recordsOf(test, site)).toEqual(inOrder(pairByRule([...one, ...other])));
      }),
      { numRuns: 20, seed: 20_261_209 },
    );
    expect(spanning).toBeGreaterThan(0);
  });
});

describe('an upload that replaces a period', () => {
  it('replaces rows of an area that is merged into one of its own, as long as it is', async () => {
    const site = await makeSite(test);
    const header = 'job,area,started,finished\n';
    await site.upload(
      `${header}J1,Wash,2026-10-24T06:00Z,2026-10-24T07:00Z\nJ2,Wash,2026-10-24T08:00Z,2026-10-24T09:00Z\nJ9,Bench,2026-10-20T08:00Z,\n`,
    );
    const columns = { job: 'job', area: 'area', started: 'started', finished: 'finished' };
    const stays = { shape: 'stay', mode: 'replace-period', timeZone: 'UTC', columns };
    const replacing = `${header}J1,Bench,2026-10-24T06:00Z,2026-10-24T07:00Z\nJ3,Bench,2026-10-24T10:00Z,\n`;
    const jobs = async () => (await recordsOf(test, site)).map(({ job, area }) => `${job} ${area}`);
    const one = await site.upload(replacing, stays);
    const asTold = ['J1 Bench', 'J1 Wash', 'J2 Wash', 'J3 Bench', 'J9 Bench'];
    const replaced = ['J1 Bench', 'J3 Bench', 'J9 Bench'];
    expect(await jobs()).toEqual(asTold);
    const id = await move(site, null);
    expect(await jobs()).toEqual(replaced);
    await undo(site, id);
    expect(await jobs()).toEqual(asTold);
    // The merge first, and the upload then.
    await site.withdraw(one.id);
    await move(site, null);
    expect(await jobs()).toEqual(['J1 Bench', 'J2 Bench', 'J9 Bench']);
    const again = await site.upload(replacing, stays);
    expect(again.account).toMatchObject({ new: 1, same: 1 });
    expect(await jobs()).toEqual(replaced);
    await site.withdraw(again.id);
    expect(await jobs()).toEqual(['J1 Bench', 'J2 Bench', 'J9 Bench']);
  });
});
