import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { startTestApp, type TestApp } from '../support/app.ts';
import { eventPlan, eventsAsCsv, inOrder, recordsOf } from '../support/event-log.ts';
import { pairByRule, type OracleEvent } from '../support/event-oracle.ts';
import { makeSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const plan = { ...eventPlan, timeZone: 'Europe/Dublin' };

const start = Date.parse('2026-10-24T06:00:00Z');
/** Few moments, so that many events fall together. */
const event = fc.record({
  job: fc.constantFrom('J1', 'J2'),
  area: fc.constantFrom('Wash', 'Bench'),
  event: fc.constantFrom('arrived', 'started', 'started', 'finished', 'finished'),
  at: fc.integer({ min: 0, max: 9 }).map((hour) => start + hour * 3_600_000),
}) as fc.Arbitrary<OracleEvent>;
const log = fc.array(event, { minLength: 1, maxLength: 30 });
/** A log cut into uploads; an event may be in several, and none is left out. */
const uploads = fc
  .tuple(log, fc.array(fc.integer({ min: 1, max: 7 }), { minLength: 30, maxLength: 30 }))
  .map(([events, inParts]) =>
    [1, 2, 4].map((bit) => events.filter((_, index) => ((inParts[index] ?? 1) & bit) !== 0)),
  );

describe('events', () => {
  it('are paired by the rule, whatever their order, over any number of overlapping uploads', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, async (parts) => {
        const site = await makeSite(test);
        for (const events of parts) {
          if (events.length === 0) continue;
          const { status, account } = await site.upload(eventsAsCsv(events), plan);
          expect(status).toBe('loaded');
          expect(account.new + account.same + account.completing).toBe(events.length);
          expect(account.correcting).toBe(0);
        }
        expect(await recordsOf(test, site)).toEqual(inOrder(pairByRule(parts.flat())));
      }),
      { numRuns: 40, seed: 20_261_201 },
    );
  });

  it('of a withdrawn upload leave the stays of the others', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, fc.integer({ min: 0, max: 2 }), async (parts, gone) => {
        const site = await makeSite(test);
        const ids: (number | null)[] = [];
        for (const events of parts) {
          ids.push(events.length === 0 ? null : (await site.upload(eventsAsCsv(events), plan)).id);
        }
        const withdrawn = ids[gone];
        if (withdrawn) await site.withdraw(withdrawn);
        const left = parts.filter((_, index) => index !== gone).flat();
        expect(await recordsOf(test, site)).toEqual(inOrder(pairByRule(left)));
      }),
      { numRuns: 20, seed: 20_261_203 },
    );
  });

  it('of a later export complete the stays that an earlier one left open', async () => {
    const site = await makeSite(test);
    const first = await site.upload('job,area,event,time\nJ1,Bench,Start,2026-10-24T08:00Z\n');
    expect(first.plan).toMatchObject({ shape: 'event', eventWords: { started: ['Start'] } });
    expect(first.account).toMatchObject({ rowsRead: 1, new: 1, warnings: { 'no-finish': 1 } });
    const second = await site.upload(
      [
        'job,area,event,time',
        'J1,Bench,Start,2026-10-24T08:00Z',
        'J1,Bench,Finish,2026-10-24T09:00Z',
        'J2,Bench,Start,2026-10-24T09:00Z',
        'J2,Bench,Finish,2026-10-24T10:00Z',
        'J3,Bench,Finish,2026-10-24T11:00Z',
        '',
      ].join('\n'),
    );
    expect(second.account).toMatchObject({ rowsRead: 5, new: 3, same: 1, completing: 1 });
    expect(second.account.warnings).toEqual({ 'finish-without-start': 1 });
  });

  it('that nobody explained are refused, and taken once the plan says what they mean', async () => {
    const site = await makeSite(test);
    const text =
      'job,area,event,time\nJ1,Bench,angefangen,2026-10-24T08:00Z\nJ1,Bench,Pause,2026-10-24T08:30Z\n';
    const read = await site.upload(text, { ...plan, eventWords: { finished: ['x'] } });
    expect(read.account).toMatchObject({ new: 0, refused: 2, refusedBy: { 'unknown-event': 2 } });
    const eventWords = { started: ['ANGEFANGEN '], ignored: ['pause'] };
    const path = `/api/sites/${site.id}/uploads/${read.id}`;
    await site.agent
      .post(`${path}/read-again`)
      .send({ plan: { ...plan, eventWords } })
      .expect(202);
    await test.settled();
    const again = await site.get<{ account: object; status: string }>(`/uploads/${read.id}`);
    expect(again).toMatchObject({
      status: 'loaded',
      account: { new: 1, refused: 0, skipped: 1, skippedBy: { 'ignored-event': 1 } },
    });
    expect(await recordsOf(test, site)).toHaveLength(1);
  });

  it('at a local time that occurs twice mean the second where only then a start precedes them', async () => {
    const site = await makeSite(test, { timeZone: 'Europe/Dublin' });
    // Clocks go back from 02:00 to 01:00 on 25 October 2026: 01:20 occurs at 00:20Z and at 01:20Z.
    await site.upload(
      [
        'job,area,event,time',
        'J1,Bench,started,2026-10-25T00:50Z',
        'J1,Bench,finished,2026-10-25 01:20',
        'J2,Bench,started,2026-10-25T00:10Z',
        'J2,Bench,finished,2026-10-25 01:20',
        '',
      ].join('\n'),
      plan,
    );
    const finished = (await recordsOf(test, site)).map((stay) =>
      new Date(stay.finished ?? 0).toISOString(),
    );
    expect(finished).toEqual(['2026-10-25T01:20:00.000Z', '2026-10-25T00:20:00.000Z']);
  });

  it('with a record id are corrected by a later row of the same id', async () => {
    const site = await makeSite(test);
    const withId = { ...plan, columns: { ...plan.columns, record: 'id' } };
    const file = (at: string) =>
      `id,job,area,event,time\nE1,J1,Bench,started,2026-10-24T08:00Z\nE2,J1,Bench,finished,${at}\n`;
    await site.upload(file('2026-10-24T09:00Z'), withId);
    const second = await site.upload(file('2026-10-24T09:30Z'), withId);
    expect(second.account).toMatchObject({ same: 1, correcting: 1, new: 0 });
    const [stay, more] = await recordsOf(test, site);
    expect(more).toBeUndefined();
    expect(new Date(stay?.finished ?? 0).toISOString()).toBe('2026-10-24T09:30:00.000Z');
  });

  it('that scrap a job end its stay', async () => {
    const site = await makeSite(test);
    const { account } = await site.upload(
      'job,area,event,time\nJ1,Bench,started,2026-10-24T08:00Z\nJ1,Bench,scrapped,2026-10-24T09:00Z\n',
    );
    expect(account).toMatchObject({ new: 2, warnings: {} });
    expect((await recordsOf(test, site))[0]?.finished).toBe(Date.parse('2026-10-24T09:00Z'));
  });
});
