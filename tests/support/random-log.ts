import fc from 'fast-check';
import type { OracleRecord } from './oracle.ts';

export type LogRow = OracleRecord;

const minute = 60_000;
/** Few moments, so that many fall together; a few to the second and the millisecond. */
const offset = fc.oneof(
  fc.integer({ min: 0, max: 4 * 24 * 4 }).map((quarter) => quarter * 15 * minute),
  fc.integer({ min: 0, max: 4 * 86_400 }).map((second) => second * 1000),
  fc.integer({ min: 0, max: 4 * 86_400_000 }),
);

/**
 * Logs of a few jobs over four days from `start`: each row knows some of its times, in order. No two rows
 * tell of the same record.
 */
export function logArbitrary(start: number): fc.Arbitrary<LogRow[]> {
  const row = fc
    .record({
      job: fc.constantFrom('J1', 'J2', 'J3', 'J4', 'J5', 'J6'),
      area: fc.constantFrom('Wash', 'Bench', 'Oven'),
      times: fc.array(offset, { minLength: 3, maxLength: 3 }),
      known: fc.constantFrom('sf', 'sf', 'sf', 'asf', 'asf', 's', 'as', 'a', 'f', 'af'),
    })
    .map(({ job, area, times, known }) => {
      const [arrived = 0, started = 0, finished = 0] = times
        .map((time) => start + time)
        .sort((one, other) => one - other);
      return {
        job,
        area,
        arrived: known.includes('a') ? arrived : null,
        started: known.includes('s') ? started : null,
        finished: known.includes('f') ? finished : null,
      };
    });
  return fc
    .uniqueArray(row, {
      minLength: 1,
      maxLength: 24,
      // A row that knows only the arrival would belong to the record that began there.
      selector: (each) =>
        `${each.job} ${each.area} ${each.started ?? each.arrived ?? each.finished}`,
    })
    .map(withoutSharedArrivals);
}

function withoutSharedArrivals(rows: LogRow[]): LogRow[] {
  const seen = new Set<string>();
  return rows.filter((row) => {
    if (row.arrived === null) return true;
    const key = `${row.job} ${row.area} ${row.arrived}`;
    if (seen.has(key)) return false;
    seen.add(key);
    return true;
  });
}

/** A log cut into up to three uploads, some rows of which come twice. */
export const cutLogArbitrary = (start: number): fc.Arbitrary<LogRow[][]> =>
  fc
    .tuple(
      logArbitrary(start),
      fc.array(fc.integer({ min: 0, max: 3 }), { minLength: 24, maxLength: 24 }),
    )
    .map(([rows, cuts]) =>
      [0, 1, 2].map((part) =>
        rows.filter((_, index) => cuts[index] === part || (cuts[index] === 3 && part > 0)),
      ),
    )
    .map((parts) => parts.filter((rows) => rows.length > 0))
    .filter((parts) => parts.length > 0);

const iso = (at: number | null) => (at === null ? '' : new Date(at).toISOString());

export function asCsv(rows: readonly LogRow[]): string {
  const lines = rows.map((row) =>
    [row.job, row.area, iso(row.arrived), iso(row.started), iso(row.finished)].join(','),
  );
  return ['job,area,arrived,started,finished', ...lines, ''].join('\n');
}

/** Many jobs over the areas, one every few hours from before `start` on: a site that has run for long. */
export function steadyLog(start: number, jobs: number): LogRow[] {
  return Array.from({ length: jobs }, (_, index) => {
    const began = start + (index - jobs / 2) * 3 * 60 * minute;
    return ['Wash', 'Bench', 'Oven'].map((area, place) => ({
      job: `S${index}`,
      area,
      arrived: null,
      started: began + place * 5 * 60 * minute,
      finished: began + (place * 5 + 3 + (index % 4)) * 60 * minute,
    }));
  }).flat();
}
