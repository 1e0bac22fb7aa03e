import type { TrustNotice } from '../../shared/contracts/trust.ts';
import type { TrustGrade } from '../../shared/trust.ts';
import { dayMs, localDay, stepBorders } from '../../shared/local-time.ts';
import { clockOffsets } from '../methods/clock-offset.ts';
import { holdsOnlyFinished } from '../methods/finish-filter.ts';
import { gradeDay, type TrustReason } from '../methods/trust-day.ts';
import { clockNotices, behindNotices, filteredNotices } from '../methods/trust-notices.ts';
import { factsOfAreas, type AreaTrust, type TrustGrid } from './area-days.ts';
import { readGapsBetweenAreas } from './gaps-between-areas.ts';
import { readPaceAtEnd } from './pace-at-end.ts';
import { readPostedFinishes } from './posted-finishes.ts';
import { readSpokenSpans, type SpokenSpan } from './spoken-spans.ts';
import { readTrustAreas } from './trust-areas.ts';
import { readClumps } from './trust-clumps.ts';
import { readTrustCounts } from './trust-counts.ts';
import { readWaitingBeforeEnd } from './waiting-before-end.ts';
import type { SiteReader } from './zone-reader.ts';

/** Days before the end of the data that are graded: a mistyped year does not make a map of centuries. */
const mostDays = 10 * 366;
/** Clocks are set right at times: only the hand-overs of so many days at the end are compared. */
const clockDays = 28;

export interface GradedDay {
  areaId: number;
  /** Place of the day in the grid. */
  day: number;
  grade: TrustGrade;
  reasons: TrustReason[];
}

/** The trust map of everything that is loaded. */
export interface SiteTrust {
  grid: TrustGrid;
  /** Those of which uploads tell, in order of flow. */
  areas: { id: number; name: string }[];
  /** By area, then by day. */
  cells: GradedDay[];
  notices: TrustNotice[];
}

/** How well the data carry each area on each local day of the loaded span, and what is wrong with them. */
export async function readSiteTrust(reader: SiteReader): Promise<SiteTrust> {
  const spans = await readSpokenSpans(reader);
  const grid = gridOf(reader, spans);
  if (grid.days.length === 0) return { grid, areas: [], cells: [], notices: [] };
  const areas = await readTrustAreas(reader);
  const counts = await readTrustCounts(reader, grid.borders);
  const trust = factsOfAreas({
    grid,
    areas,
    spans,
    counts,
    posted: (await readPostedFinishes(reader, grid.borders)) ?? counts,
    clumps: await readClumps(reader, grid.borders),
    waiting: await readWaitingBeforeEnd(reader),
  });
  const cells = trust.flatMap(({ area, facts }) =>
    facts.map((each, day) => ({ areaId: area.id, day, ...gradeDay(each) })),
  );
  return {
    grid,
    areas: trust.map(({ area }) => ({ id: area.id, name: area.name })),
    cells,
    notices: await readNotices(reader, grid, trust),
  };
}

function gridOf({ rules }: SiteReader, spans: readonly SpokenSpan[]): TrustGrid {
  if (spans.length === 0) return { days: [], weekdays: [], borders: [], latest: 0 };
  const latest = Math.max(...spans.map((span) => span.until));
  const first = Math.min(...spans.map((span) => span.from));
  const from = Math.max(first, latest - mostDays * dayMs);
  const borders = stepBorders(rules, 'day', from, latest + 1);
  const days = borders.slice(0, -1).map((border) => localDay(rules, border));
  return { days, weekdays: days.map((day) => new Date(day).getUTCDay()), borders, latest };
}

async function readNotices(
  reader: SiteReader,
  grid: TrustGrid,
  trust: readonly AreaTrust[],
): Promise<TrustNotice[]> {
  const names = new Map(trust.map(({ area }) => [area.id, area.name]));
  const pace = await readPaceAtEnd(reader, { first: grid.borders[0] ?? 0, latest: grid.latest });
  const gaps = await readGapsBetweenAreas(reader, grid.latest - clockDays * dayMs);
  return [
    ...filteredNotices(pace !== null && holdsOnlyFinished(pace)),
    ...behindNotices(trust.flatMap(({ area, behind }) => (behind ? [{ area, ...behind }] : []))),
    ...clockNotices(clockOffsets(gaps), names),
  ];
}
