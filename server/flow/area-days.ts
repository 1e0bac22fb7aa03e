import { dayMs } from '../../shared/local-time.ts';
import { learnPostingDelay } from '../methods/posting-delay.ts';
import { leastFinishesForGrain, noTimes, timeGrain, type DayTimes } from '../methods/time-grain.ts';
import type { DayFacts } from '../methods/trust-day.ts';
import {
  isImplausibleSilence,
  longRests,
  unusuallyFew,
  type CountedDay,
  type FewVerdict,
} from '../methods/unusually-few.ts';
import type { PostedInArea } from './posted-finishes.ts';
import type { SpokenSpan } from './spoken-spans.ts';
import type { TrustArea } from './trust-areas.ts';
import type { Clumps } from './trust-clumps.ts';
import type { TrustCount } from './trust-counts.ts';
import type { WaitingBeforeEnd } from './waiting-before-end.ts';

/** Local days over the loaded span: `days[i]` runs from `borders[i]` to `borders[i + 1]`. */
export interface TrustGrid {
  days: string[];
  weekdays: number[];
  borders: number[];
  /** Latest moment told of any area. */
  latest: number;
}

export interface AreaTrust {
  area: TrustArea;
  /** By day, up to the site's last one, or the area's own where it is in use no more. */
  facts: DayFacts[];
  /** Where its feed lies behind the others: since when, by how much, and how many times were to be expected. */
  behind: { since: number; seconds: number; expected: number } | null;
}

export interface TrustEvidence {
  grid: TrustGrid;
  areas: readonly TrustArea[];
  spans: readonly SpokenSpan[];
  counts: readonly TrustCount[];
  /** Finishes by the upload that first told them. */
  posted: readonly PostedInArea[];
  clumps: readonly Clumps[];
  waiting: readonly WaitingBeforeEnd[];
}

/** An area is in use while its data reach into the last 28 days of the site's. */
const inUseMs = 28 * dayMs;
/** Days before and after one with few finishes, with which its grain is judged. */
const neighbours = 3;

interface CountsOfDay extends DayTimes {
  times: number;
  untold: number;
  inferred: number;
}
const nothing: CountsOfDay = { ...noTimes, times: 0, untold: 0, inferred: 0 };

/** Puts together, for every area that uploads tell of, what is known of each of its days. */
export function factsOfAreas(evidence: TrustEvidence): AreaTrust[] {
  const rest = restOfSite(evidence);
  return evidence.areas.flatMap((area) => {
    const own = evidence.spans.filter((span) => span.areaId === area.id);
    return own.length === 0 ? [] : [areaTrust(evidence, area, own, rest)];
  });
}

/** Days on which the site as a whole rested, and those of them that lie in long stretches. */
interface Rest {
  rests: boolean[];
  long: boolean[];
}

function restOfSite({ grid, counts }: TrustEvidence): Rest {
  const totals = grid.days.map(() => 0);
  for (const each of counts) totals[each.day] = (totals[each.day] ?? 0) + each.times;
  const days = totals.map((count, day): CountedDay => ({
    weekday: grid.weekdays[day] ?? 0,
    count,
    leftOut: day === 0 || day === totals.length - 1,
  }));
  const verdicts = unusuallyFew(days);
  return { rests: verdicts.map((verdict) => verdict.isFew), long: longRests(days, verdicts) };
}

function areaTrust(
  { grid, counts, posted, clumps, waiting }: TrustEvidence,
  area: TrustArea,
  spans: readonly SpokenSpan[],
  rest: Rest,
): AreaTrust {
  const ofArea = counts.filter((each) => each.areaId === area.id);
  const byDay = countsByDay(
    grid,
    ofArea,
    clumps.filter((each) => each.areaId === area.id),
  );
  const ownUntil = Math.max(...spans.map((span) => span.ownUntil));
  const dataUntil = Math.max(...spans.map((span) => span.until));
  const lastDay = dayOf(grid, dataUntil);
  const warmDay = dayOf(grid, area.warmUntil ?? grid.latest);
  const isSpoken = grid.days.map((_, day) => speaks(grid, spans, day));
  const verdicts = unusuallyFew(
    byDay.map(({ times }, day) => ({
      weekday: grid.weekdays[day] ?? 0,
      count: times,
      leftOut:
        day <= warmDay ||
        day >= grid.days.length - 1 ||
        rest.rests[day] === true ||
        isSpoken[day] !== true,
    })),
  );
  const isInUse = ownUntil >= grid.latest - inUseMs;
  const shown = isInUse ? grid.days.length : dayOf(grid, ownUntil) + 1;
  const delay = learnPostingDelay(
    posted.filter((each) => each.areaId === area.id),
    spans.map((span) => spokenDays(grid, span)),
  );
  const wait = (waiting.find((each) => each.areaId === area.id)?.waitingSeconds ?? 0) * 1000;
  const facts = byDay.slice(0, shown).map((day, index): DayFacts => ({
    weekday: grid.weekdays[index] ?? 0,
    times: day.times,
    usual: verdicts[index]?.usual ?? null,
    isFew: verdicts[index]?.isFew ?? false,
    inLongRest: rest.long[index] ?? false,
    isSpoken: isSpoken[index] ?? false,
    isLastDay: index === lastDay,
    daysBeforeEnd: lastDay - index,
    delay,
    uploads: spans.length,
    waitingSeconds:
      wait > 0 && index < lastDay && (grid.borders[index + 1] ?? 0) > dataUntil - wait
        ? wait / 1000
        : null,
    ...grainOf(byDay, index),
    left: day.finishes + day.inferred,
    inferred: day.inferred,
    untold: day.untold,
  }));
  return { area, facts, behind: isInUse ? behind(grid, ownUntil, verdicts, rest.rests) : null };
}

function countsByDay(
  grid: TrustGrid,
  counts: readonly TrustCount[],
  clumps: readonly Clumps[],
): CountsOfDay[] {
  const byDay = grid.days.map(() => ({ ...nothing }));
  for (const each of counts) {
    const day = byDay[each.day];
    if (day) addTo(day, each);
  }
  for (const { day, ...moments } of clumps) {
    const ofDay = byDay[day];
    if (ofDay) Object.assign(ofDay, { clumped: moments.clumped, clumps: moments.clumps });
  }
  return byDay;
}

const summed = [
  'times',
  'finishes',
  'onHours',
  'briefForHours',
  'onMinutes',
  'briefForMinutes',
  'untold',
  'inferred',
] as const;

function addTo(day: CountsOfDay, more: Pick<CountsOfDay, (typeof summed)[number]>): void {
  for (const name of summed) day[name] += more[name];
}

/** Clumps are moments of one day: days that are judged together are judged by hours and minutes alone. */
function grainOf(
  byDay: readonly CountsOfDay[],
  index: number,
): Pick<DayFacts, 'grain' | 'timesForGrain' | 'isGrainOfDay'> {
  const day = byDay[index] ?? nothing;
  const isGrainOfDay = day.finishes >= leastFinishesForGrain || day.finishes === 0;
  if (isGrainOfDay) return { grain: timeGrain(day), timesForGrain: day, isGrainOfDay };
  const about = { ...nothing };
  for (const each of byDay.slice(Math.max(0, index - neighbours), index + neighbours + 1))
    addTo(about, each);
  return { grain: timeGrain(about), timesForGrain: about, isGrainOfDay };
}

/** The feed is behind where whole days passed since its latest time, on which silence is implausible. */
function behind(
  grid: TrustGrid,
  ownUntil: number,
  verdicts: readonly FewVerdict[],
  rests: readonly boolean[],
): AreaTrust['behind'] {
  let expected = 0;
  for (let day = dayOf(grid, ownUntil) + 1; day < grid.days.length - 1; day++)
    if (!rests[day]) expected += verdicts[day]?.usual ?? 0;
  if (!isImplausibleSilence(expected)) return null;
  return { since: ownUntil, seconds: (grid.latest - ownUntil) / 1000, expected };
}

const speaks = ({ borders }: TrustGrid, spans: readonly SpokenSpan[], day: number): boolean =>
  spans.some(
    (span) => span.from < (borders[day + 1] ?? 0) && span.until >= (borders[day] ?? Infinity),
  );

const spokenDays = (grid: TrustGrid, span: SpokenSpan) => ({
  uploadId: span.uploadId,
  firstDay: dayOf(grid, span.ownFrom),
  lastDay: dayOf(grid, span.until),
});

/** Place of the day in which a moment lies; the first or last where it lies outside. */
function dayOf({ borders, days }: TrustGrid, at: number): number {
  const after = borders.findIndex((border) => border > at);
  if (after < 0) return days.length - 1;
  return Math.max(0, after - 1);
}
