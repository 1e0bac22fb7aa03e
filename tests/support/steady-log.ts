/** A row of a log that a test takes something from: times are ISO texts, empty where they are not told. */
export interface LogRow {
  job: string;
  area: string;
  started: string;
  finished: string;
}

const minute = 60_000;
const hour = 60 * minute;
const areas = ['Wash', 'Bench', 'Ship'];
/** Monday 31 August 2026; forty days later it is Friday. */
const from = Date.UTC(2026, 7, 31);
const days = 40;

/**
 * Jobs that go through three areas, from one to the next within one to four minutes, on weekdays from six
 * o'clock on within the day; or around the clock, every day. Times are to the second and never on a minute.
 */
export function steadyLog(
  given: { jobsPerDay?: number; aroundTheClock?: true; hoursInArea?: number } = {},
): LogRow[] {
  const { jobsPerDay = 12, aroundTheClock = false, hoursInArea = 1 } = given;
  const rows: LogRow[] = [];
  for (let day = 0; day < days; day++) {
    const isWeekend = day % 7 >= 5;
    if (isWeekend && !aroundTheClock) continue;
    for (let job = 0; job < jobsPerDay; job++) {
      const spread = aroundTheClock ? 24 : 12;
      let at = from + day * 24 * hour + (aroundTheClock ? 0 : 6 * hour);
      at += (job * spread * hour) / jobsPerDay + 7_000;
      for (const [place, area] of areas.entries()) {
        const stretch = 0.5 + ((day * 5 + job * 7 + place * 3) % 11) / 11;
        const finished = at + Math.round((hoursInArea * stretch * hour) / minute) * minute + 13_000;
        rows.push({ job: `J${day}-${job}`, area, started: iso(at), finished: iso(finished) });
        at = finished + (1 + ((day + job + place) % 4)) * minute + 11_000;
      }
    }
  }
  return rows;
}

const iso = (at: number) => `${new Date(at).toISOString().slice(0, 19)}Z`;

export const toCsv = (rows: readonly LogRow[]): string =>
  [
    'job,area,started,finished',
    ...rows.map((row) => [row.job, row.area, row.started, row.finished].join(',')),
    '',
  ].join('\n');

/** The same with a row for each start and finish. */
export const toEventCsv = (rows: readonly LogRow[]): string =>
  [
    'job,area,event,time',
    ...rows.flatMap(({ job, area, started, finished }) => [
      `${job},${area},in,${started}`,
      `${job},${area},out,${finished}`,
    ]),
    '',
  ].join('\n');
