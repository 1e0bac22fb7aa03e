import { sql } from 'drizzle-orm';
import fc from 'fast-check';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Areas } from '../../shared/contracts/areas.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { withTenant } from '../../server/db/tenant.ts';
import { rebuildSite } from '../../server/flow/derive/derive.ts';
import { readDerived } from '../../server/flow/derived-state.ts';
import { inDerivation } from '../../server/jobs/derivation-of-site.ts';
import { startTestApp, type TestApp } from '../support/app.ts';
import { asCsv, cutLogArbitrary, steadyLog, type LogRow } from '../support/random-log.ts';
import { makeSite, type TestSite } from '../support/site.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp();
});
afterAll(() => test.close());

const lowmoor = 1;
const timeZone = 'Europe/Dublin';
const start = Date.parse('2026-10-23T00:00:00Z');
const from = Date.parse('2026-10-25T00:00:00Z');

const state = (site: TestSite) =>
  withTenant(test.db, lowmoor, (tx) => readDerived(tx, lowmoor, site.id));

const areasOf = (site: TestSite) => site.get<Areas>('/areas');

async function move(site: TestSite, area: string, target: string, at: number | null) {
  const { areas } = await areasOf(site);
  const idOf = (name: string) => areas.find((each) => each.name === name)?.id;
  const response = await site.agent.post(`/api/sites/${site.id}/area-moves`).send({
    areaId: idOf(area),
    targetAreaId: idOf(target),
    from: at === null ? null : new Date(at).toISOString(),
  });
  await test.settled();
  return { status: response.status, id: (response.body as { id: number }).id };
}

async function undo(site: TestSite, moveId: number) {
  const response = await site.agent.delete(`/api/sites/${site.id}/area-moves/${moveId}`);
  await test.settled();
  return response.status;
}

/**
 * What a person sees of a site, by names: two sites have other ids. Zones without data are left out, for an
 * area that only a move names has none.
 */
async function seen(site: TestSite) {
  const zones = await site.zones();
  const query = { from: '2026-10-20T00:00:00Z', to: '2026-11-02T00:00:00Z', step: 'hour' };
  const figures: Record<string, unknown> = {};
  for (const zone of zones.filter((each) => each.dataUntil !== null)) {
    const { points } = await site.get<{ points: unknown[] }>(`/zones/${zone.id}/series`, query);
    const { dataFrom, dataUntil, warmUntil } = zone;
    const name = zone.kind === 'site' ? 'site' : zone.name;
    figures[name] = { dataFrom, dataUntil, warmUntil, points };
  }
  const { rows } = await withTenant(test.db, lowmoor, (tx) =>
    tx.execute(sql`
      select
        job_key, ordinal, zone.name as area, pass, arrived, started, finished, entered, left_at,
        finish_inferred, stay_from, line
      from record join zone on zone.id = area_id
      where record.site_id = ${site.id}
      order by job_key, ordinal`),
  );
  return { figures, records: rows };
}

const about = (row: LogRow) => row.started ?? row.arrived ?? row.finished ?? 0;

interface Move {
  area: string;
  target: string;
  from: number | null;
}

/** The rows as the export would have written them, had it known the moves: the slow and obvious oracle. */
function rewritten(rows: readonly LogRow[], moves: readonly Move[]): LogRow[] {
  return rows.map((row) => {
    let { area } = row;
    for (;;) {
      const here = area;
      const inForce = moves
        .filter((each) => each.area === here && (each.from ?? -Infinity) <= about(row))
        .sort((one, other) => (other.from ?? -Infinity) - (one.from ?? -Infinity))[0];
      if (!inForce) return { ...row, area };
      area = inForce.target;
    }
  });
}

const areas = ['Wash', 'Bench', 'Oven'] as const;
const aMove = fc
  .record({
    area: fc.constantFrom(...areas),
    target: fc.constantFrom(...areas),
    from: fc.constantFrom(null, null, from, from + 6 * 3_600_000),
  })
  .filter(({ area, target }) => area !== target);

const uploads = cutLogArbitrary(start);

describe('a move that is taken back', () => {
  it('leaves every derived table as it was', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, aMove, async (parts, { area, target, from: at }) => {
        const site = await makeSite(test, { timeZone });
        await site.upload(asCsv(steadyLog(start, 10)));
        for (const rows of parts) await site.upload(asCsv(rows));
        const before = await state(site);
        const made = await move(site, area, target, at);
        expect(made.status).toBe(201);
        if (at === null) expect(await state(site)).not.toEqual(before);
        expect(await undo(site, made.id)).toBe(204);
        expect(await state(site)).toEqual(before);
      }),
      { numRuns: 8, seed: 20_261_205 },
    );
  });
});

describe('rows that are moved', () => {
  it('count as if the export had named the other area, whatever came first', async () => {
    await fc.assert(
      fc.asyncProperty(uploads, aMove, fc.boolean(), async (parts, wanted, moveFirst) => {
        const site = await makeSite(test, { timeZone });
        const steady = steadyLog(start, 10);
        await site.upload(asCsv(steady));
        if (moveFirst) await move(site, wanted.area, wanted.target, wanted.from);
        for (const rows of parts) await site.upload(asCsv(rows));
        if (!moveFirst) await move(site, wanted.area, wanted.target, wanted.from);
        const other = await makeSite(test, { timeZone });
        for (const rows of [steady, ...parts]) await other.upload(asCsv(rewritten(rows, [wanted])));
        expect(await seen(site)).toEqual(await seen(other));
      }),
      { numRuns: 12, seed: 20_261_206 },
    );
  });

  it('and uploads and withdrawals come and go in any order, as if what is gone had never been', async () => {
    const act = fc.oneof(
      fc.record({ kind: fc.constant('upload' as const), which: fc.nat() }),
      fc.record({ kind: fc.constant('withdraw' as const), which: fc.nat() }),
      fc.record({ kind: fc.constant('move' as const), wanted: aMove }),
      fc.record({ kind: fc.constant('undo' as const), which: fc.nat() }),
    );
    let undone = 0;
    let withdrawn = 0;
    await fc.assert(
      fc.asyncProperty(
        uploads,
        fc.array(act, { minLength: 4, maxLength: 9 }),
        async (parts, acts) => {
          const site = await makeSite(test, { timeZone });
          const loaded: { id: number; rows: LogRow[] }[] = [];
          const load = async (rows: LogRow[]) =>
            loaded.push({ id: (await site.upload(asCsv(rows))).id, rows });
          for (const rows of parts) await load(rows);
          for (const each of acts) {
            if (each.kind === 'upload') await load(parts[each.which % parts.length] ?? []);
            if (each.kind === 'withdraw' && loaded.length > 0) {
              const [gone] = loaded.splice(each.which % loaded.length, 1);
              await site.withdraw(gone?.id ?? 0);
              withdrawn += 1;
            }
            if (each.kind === 'move') {
              const { area, target, from: at } = each.wanted;
              expect([201, 400, 409]).toContain((await move(site, area, target, at)).status);
            }
            const { moves } = await areasOf(site);
            if (each.kind === 'undo' && moves.length > 0) {
              const status = await undo(site, moves[each.which % moves.length]?.id ?? 0);
              expect([204, 409]).toContain(status);
              undone += status === 204 ? 1 : 0;
            }
          }
          const left = await areasOf(site);
          const moves = left.moves.map((each) => ({
            area: each.areaName,
            target: each.targetAreaName,
            from: each.from === null ? null : Date.parse(each.from),
          }));
          const other = await makeSite(test, { timeZone });
          for (const { rows } of loaded) await other.upload(asCsv(rewritten(rows, moves)));
          expect(await seen(site)).toEqual(await seen(other));
          const derived = await state(site);
          await inDerivation(test.db, lowmoor, site.id, rebuildSite);
          expect(await state(site)).toEqual(derived);
          // Only areas that are still told of, and those that their rows are moved to, are left.
          const told = new Set(loaded.flatMap(({ rows }) => rows.map((row) => row.area)));
          for (let grown = -1; grown !== told.size;) {
            grown = told.size;
            for (const each of moves) if (told.has(each.area)) told.add(each.target);
          }
          expect(left.areas.map((area) => area.name).sort()).toEqual([...told].sort());
        },
      ),
      { numRuns: 14, seed: 20_261_207 },
    );
    expect(undone).toBeGreaterThan(0);
    expect(withdrawn).toBeGreaterThan(0);
  });

  it('of every telling of one record go together, wherever its times fall', async () => {
    const site = await makeSite(test, { timeZone });
    const columns = 'record id,job,area,arrived,started,finished\n';
    // Arrived before the day of the move, started after it, told by and by; and the other way round by id.
    await site.upload(
      `${columns},J1,Bench,2026-10-24T20:00Z,,\nR2,J2,Bench,,2026-10-24T22:00Z,\n,J3,Oven,,2026-10-24T01:00Z,\n`,
    );
    await site.upload(
      `${columns},J1,Bench,2026-10-24T20:00Z,2026-10-25T01:00Z,\nR2,J2,Bench,,,2026-10-25T03:00Z\n`,
    );
    const before = await state(site);
    const { id } = await move(site, 'Bench', 'Oven', from);
    const recordsOf = async (job: string) =>
      (
        await site.get<{ records: { areaName: string; versions: unknown[] }[] }>(`/jobs/${job}`)
      ).records.map((record) => [record.areaName, record.versions.length]);
    expect(await recordsOf('J1')).toEqual([['Oven', 2]]);
    expect(await recordsOf('J2')).toEqual([['Bench', 2]]);
    expect(await undo(site, id)).toBe(204);
    expect(await recordsOf('J1')).toEqual([['Bench', 2]]);
    expect(await state(site)).toEqual(before);
  });

  it('count in the loops that name both areas as before', async () => {
    const site = await makeSite(test, { timeZone });
    await site.upload(asCsv(steadyLog(start, 10)));
    const [wash, bench] = [await site.zone('Wash'), await site.zone('Bench')];
    const made = await site.agent
      .post(`/api/sites/${site.id}/zones`)
      .send({ kind: 'loop', name: 'Both', areaIds: [wash.id, bench.id] })
      .expect(201);
    await test.settled();
    const loop = (made.body as Zone).id;
    const before = await state(site);
    const wip = async () =>
      (await site.summary(loop, '2026-10-22T00:00:00Z', '2026-10-24T00:00:00Z')).wipMean;
    const level = await wip();
    const { id } = await move(site, 'Bench', 'Wash', null);
    expect(await wip()).toBe(level);
    expect((await site.zone('Both')).areaIds).toEqual([wash.id]);
    expect(await undo(site, id)).toBe(204);
    expect((await site.zone('Both')).areaIds).toEqual([wash.id, bench.id]);
    expect(await state(site)).toEqual(before);
  });
});
