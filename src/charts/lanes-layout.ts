import { dayMs, hourMs, localClock, stepBorders, type ZoneRules } from '../../shared/local-time.ts';
import { placeOn, type RulerScale } from './ruler-scale.ts';

/** One visit, in milliseconds: when it began, when work on it began, when it ended. Null where not known. */
export interface Visit {
  id: string;
  lane: string;
  entered: number;
  started: number | null;
  left: number | null;
  pass: number;
}

export interface DrawnVisit {
  id: string;
  lane: number;
  x: number;
  width: number;
  /** Where waiting gives way to process; null where they cannot be told apart. */
  splitX: number | null;
  isOpen: boolean;
  /** Which visit to the lane it is, from 1. */
  visit: number;
}

export interface Lanes {
  names: string[];
  visits: DrawnVisit[];
  /** From the end of a visit to the beginning of the next, where that is later. */
  steps: { x1: number; lane1: number; x2: number; lane2: number }[];
  /** Where a new pass begins. */
  passes: { x: number; pass: number }[];
  ticks: { x: number; at: number }[];
  /** Whether ticks are closer than a day, and are to be told with the time of day. */
  withTime: boolean;
}

/** A visit is at least so wide, so that it is seen and hit. */
const leastWidth = 3;
const roomForTick = 92;

/**
 * Lays out visits as bars in lanes, one for each place in order of the first visit, over the span of all.
 *
 * @param visits in order
 * @param until where an open visit ends in the drawing
 */
export function layoutLanes(
  visits: readonly Visit[],
  until: number,
  width: number,
  rules: ZoneRules,
): Lanes {
  const names = [...new Set(visits.map((visit) => visit.lane))];
  const endOf = (visit: Visit) => visit.left ?? Math.max(until, visit.entered);
  const from = Math.min(...visits.map((visit) => visit.entered));
  const to = Math.max(from + hourMs, ...visits.map(endOf));
  const scale: RulerScale = { from, to, width };
  const seen = new Map<string, number>();
  const drawn = visits.map((visit): DrawnVisit => {
    const count = (seen.get(visit.lane) ?? 0) + 1;
    seen.set(visit.lane, count);
    const x = Math.min(placeOn(scale, visit.entered), width - leastWidth);
    return {
      id: visit.id,
      lane: names.indexOf(visit.lane),
      x,
      width: Math.max(leastWidth, placeOn(scale, endOf(visit)) - x),
      splitX: visit.started === null ? null : placeOn(scale, visit.started),
      isOpen: visit.left === null,
      visit: count,
    };
  });
  return {
    names,
    visits: drawn,
    steps: drawn.slice(1).map((next, index) => {
      const before = drawn[index] ?? next;
      const x1 = Math.min(before.x + before.width, next.x);
      return { x1, lane1: before.lane, x2: next.x, lane2: next.lane };
    }),
    passes: visits.flatMap((visit, index) =>
      index > 0 && visit.pass !== visits[index - 1]?.pass
        ? [{ x: placeOn(scale, visit.entered), pass: visit.pass }]
        : [],
    ),
    ...ticksOf(scale, rules),
  };
}

const hourSteps = [1, 3, 6, 12];
const daySteps = [1, 2, 7, 14, 28, 91, 182, 364];

/** Ticks at local hours or days, as close as their labels allow. */
function ticksOf(scale: RulerScale, rules: ZoneRules): Pick<Lanes, 'ticks' | 'withTime'> {
  const most = Math.max(1, Math.floor(scale.width / roomForTick));
  const span = scale.to - scale.from;
  const hours = hourSteps.find((step) => span / (step * hourMs) <= most);
  const within = (at: number) => at >= scale.from && at <= scale.to;
  const place = (at: number) => ({ at, x: placeOn(scale, at) });
  if (hours !== undefined) {
    const borders = stepBorders(rules, 'hour', scale.from, scale.to).filter(
      (at) => (localClock(rules, at) / hourMs) % hours === 0,
    );
    return { ticks: borders.filter(within).map(place), withTime: true };
  }
  const days = daySteps.find((step) => span / (step * dayMs) <= most) ?? 728;
  const borders = stepBorders(rules, 'day', scale.from, scale.to).filter(within);
  return { ticks: borders.filter((_, index) => index % days === 0).map(place), withTime: false };
}
