/**
 * Local time of a site: offsets, days, ISO weeks and local hours, from the runtime's time-zone data.
 * Everything is half-open and in milliseconds since 1970 UTC; nothing here asks what time it is now.
 */

/** An offset from UTC that holds from `at` on, until the next change. */
export interface OffsetChange {
  at: number;
  offset: number;
}

export interface ZoneRules {
  timeZone: string;
  /** In order; the first holds since ever. */
  changes: readonly OffsetChange[];
}

export const hourMs = 3_600_000;
export const dayMs = 24 * hourMs;

/** Earliest and latest moment that an export may name; outside it, rules are those at the border. */
const earliest = Date.UTC(1949, 11, 30);
const latest = Date.UTC(2100, 0, 1);

/** Whether the runtime knows the time zone by this name. */
export function isTimeZone(timeZone: string): boolean {
  try {
    new Intl.DateTimeFormat('en-US', { timeZone });
    return true;
  } catch {
    return false;
  }
}

const known = new Map<string, ZoneRules>();

/** The offsets of a time zone from 1950 to 2100, found once and kept. @throws RangeError for an unknown zone */
export function zoneRules(timeZone: string): ZoneRules {
  const kept = known.get(timeZone);
  if (kept) return kept;
  const rules = { timeZone, changes: findChanges(offsetReader(timeZone)) };
  known.set(timeZone, rules);
  return rules;
}

/** Reads the offset in milliseconds at a moment, to the second, through the runtime's calendar. */
function offsetReader(timeZone: string): (at: number) => number {
  const format = new Intl.DateTimeFormat('en-US', {
    timeZone,
    calendar: 'gregory',
    numberingSystem: 'latn',
    hourCycle: 'h23',
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: 'numeric',
    minute: 'numeric',
    second: 'numeric',
  });
  return (at) => {
    const field: Record<string, number> = {};
    for (const part of format.formatToParts(at)) field[part.type] = Number(part.value);
    const { year = 0, month = 1, day = 1, hour = 0, minute = 0, second = 0 } = field;
    const local = Date.UTC(year, month - 1, day, hour, minute, second);
    return local - Math.floor(at / 1000) * 1000;
  };
}

/** Walks in steps shorter than any pair of changes is apart, and halves down to the second of each. */
function findChanges(offsetAt: (at: number) => number): OffsetChange[] {
  const changes = [{ at: -Infinity, offset: offsetAt(earliest) }];
  const stride = 7 * dayMs;
  let offset = offsetAt(earliest);
  for (let at = earliest; at < latest; at += stride) {
    const next = offsetAt(at + stride);
    if (next === offset) continue;
    changes.push(...changesBetween(offsetAt, at, offset, at + stride));
    offset = next;
  }
  return changes;
}

function changesBetween(
  offsetAt: (at: number) => number,
  from: number,
  offset: number,
  to: number,
): OffsetChange[] {
  let low = from;
  let high = to;
  while (high - low > 1000) {
    const middle = Math.floor((low + high) / 2000) * 1000;
    if (offsetAt(middle) === offset) low = middle;
    else high = middle;
  }
  const found = { at: high, offset: offsetAt(high) };
  return found.offset === offsetAt(to)
    ? [found]
    : [found, ...changesBetween(offsetAt, high, found.offset, to)];
}

/** The change in force at a moment, by its place in the list. */
function changeIndexAt(rules: ZoneRules, at: number): number {
  let low = 0;
  let high = rules.changes.length - 1;
  while (low < high) {
    const middle = (low + high + 1) >> 1;
    if ((rules.changes[middle]?.at ?? 0) <= at) low = middle;
    else high = middle - 1;
  }
  return low;
}

/** Offset from UTC in milliseconds at a moment. */
export function offsetAt(rules: ZoneRules, at: number): number {
  return rules.changes[changeIndexAt(rules, at)]?.offset ?? 0;
}

/** What a clock on the wall shows at a moment, as if it were UTC. */
export function localClock(rules: ZoneRules, at: number): number {
  return at + offsetAt(rules, at);
}

export interface LocalReading {
  /** The moment meant; the first where the clock shows it twice. */
  at: number;
  /** The second moment at which the clock shows the same, where it does. */
  second: number | null;
  /** Whether the clock never shows it: it is then read with the offset before the gap. */
  skipped: boolean;
}

/**
 * The moment that a local date and time without an offset means, by RFC 5545 section 3.3.5.
 *
 * @param clock what the wall clock shows, as if it were UTC
 */
export function readLocal(rules: ZoneRules, clock: number): LocalReading {
  const first = changeIndexAt(rules, clock - dayMs);
  const last = changeIndexAt(rules, clock + dayMs);
  const found: number[] = [];
  for (let index = first; index <= last; index++) {
    const at = clock - (rules.changes[index]?.offset ?? 0);
    if (changeIndexAt(rules, at) === index) found.push(at);
  }
  const [at, second] = found;
  if (at !== undefined) return { at, second: second ?? null, skipped: false };
  return { at: readAcrossGap(rules, clock, first, last), second: null, skipped: true };
}

function readAcrossGap(rules: ZoneRules, clock: number, first: number, last: number): number {
  for (let index = first; index < last; index++) {
    const before = rules.changes[index]?.offset ?? 0;
    const next = rules.changes[index + 1];
    if (next && clock - before >= next.at && clock - next.offset < next.at) return clock - before;
  }
  return clock - (rules.changes[first]?.offset ?? 0);
}

export type LocalStep = 'hour' | 'day' | 'week';

/** The first moment of the local day that shows this calendar day (as if UTC midnight). */
function startOfLocalDay(rules: ZoneRules, midnight: number): number {
  const reading = readLocal(rules, midnight);
  if (!reading.skipped) return reading.at;
  // Midnight does not occur: the day begins with the change that leaps over it.
  const index = changeIndexAt(rules, reading.at);
  return rules.changes[index]?.at ?? reading.at;
}

const floorTo = (value: number, size: number): number => Math.floor(value / size) * size;
/** 1970 began on a Thursday: ISO weeks begin three days earlier. */
const mondayShift = 3 * dayMs;

/** Calendar day (as if UTC midnight) on which a step of days or weeks begins. */
function stepMidnight(clock: number, step: 'day' | 'week'): number {
  return step === 'day'
    ? floorTo(clock, dayMs)
    : floorTo(clock + mondayShift, 7 * dayMs) - mondayShift;
}

/**
 * Borders of the local steps that cover [from, to), widened outwards to whole steps: n steps have n + 1
 * borders. Days of 23 and 25 hours, and local hours of 30 or 90 minutes, keep their true length.
 */
export function stepBorders(rules: ZoneRules, step: LocalStep, from: number, to: number): number[] {
  return step === 'hour' ? hourBorders(rules, from, to) : dayBorders(rules, step, from, to);
}

function dayBorders(rules: ZoneRules, step: 'day' | 'week', from: number, to: number): number[] {
  const size = step === 'day' ? dayMs : 7 * dayMs;
  let midnight = stepMidnight(localClock(rules, from), step);
  // A clock set back over midnight shows the evening before once more.
  while (startOfLocalDay(rules, midnight) > from) midnight -= size;
  while (startOfLocalDay(rules, midnight + size) <= from) midnight += size;
  const borders = [startOfLocalDay(rules, midnight)];
  do {
    midnight += size;
    borders.push(startOfLocalDay(rules, midnight));
  } while ((borders.at(-1) ?? to) < to);
  return borders;
}

/** The local hours within one stretch of an unbroken offset-of-the-hour. */
export interface HourStretch {
  /** [from, until): moments that this stretch speaks for. */
  from: number;
  until: number;
  /** Some moment at which an hour begins: others lie whole hours away. */
  anchor: number;
  /** The last hour's start; it runs to `until`, longer than an hour where the clock was set back. */
  lastStart: number;
}

/**
 * The local hours over [from, to) as few stretches: hour of t = least(lastStart, greatest(from, bin of
 * one hour from the anchor)). One stretch, unless the clock moved by a part of an hour.
 */
export function hourStretches(rules: ZoneRules, from: number, to: number): HourStretch[] {
  const first = changeIndexAt(rules, from);
  const last = changeIndexAt(rules, to);
  const stretches: HourStretch[] = [stretchFrom(-Infinity, rules.changes[first]?.offset ?? 0)];
  for (let index = first + 1; index <= last; index++) {
    const change = rules.changes[index];
    const before = rules.changes[index - 1];
    if (!change || !before || (change.offset - before.offset) % hourMs === 0) continue;
    const open = stretches.at(-1);
    if (!open) continue;
    const begins = nextStretchStart(change, before);
    const lastBin = open.anchor + floorTo(change.at - 1 - open.anchor, hourMs);
    stretches[stretches.length - 1] = { ...open, until: begins, lastStart: lastBin };
    stretches.push(stretchFrom(begins, change.offset));
  }
  return stretches;
}

const stretchFrom = (from: number, offset: number): HourStretch => ({
  from,
  until: Infinity,
  anchor: ((-offset % hourMs) + hourMs) % hourMs,
  lastStart: Infinity,
});

/** Set forward: a new hour begins with the change. Set back within an hour: that hour goes on to its end. */
function nextStretchStart(change: OffsetChange, before: OffsetChange): number {
  const shownBefore = floorTo(change.at - 1 + before.offset, hourMs);
  const shownAfter = floorTo(change.at + change.offset, hourMs);
  return shownAfter === shownBefore ? shownAfter + hourMs - change.offset : change.at;
}

/** The start of the local hour in which a moment lies. */
export function hourStart(stretches: readonly HourStretch[], at: number): number {
  const stretch = stretches.find((each) => at >= each.from && at < each.until);
  if (!stretch) throw new RangeError('The moment lies outside the stretches.');
  const bin = stretch.anchor + floorTo(at - stretch.anchor, hourMs);
  return Math.min(stretch.lastStart, Math.max(stretch.from, bin));
}

function hourBorders(rules: ZoneRules, from: number, to: number): number[] {
  const stretches = hourStretches(rules, from - 2 * hourMs, to + 2 * hourMs);
  const borders = [hourStart(stretches, from)];
  while ((borders.at(-1) ?? to) < to) {
    const start = borders.at(-1) ?? to;
    borders.push(hourEnd(stretches, start));
  }
  return borders;
}

/** The end of the local hour that begins at `start`. */
export function hourEnd(stretches: readonly HourStretch[], start: number): number {
  const stretch = stretches.find((each) => start >= each.from && start < each.until);
  if (!stretch) throw new RangeError('The moment lies outside the stretches.');
  if (start >= stretch.lastStart) return stretch.until;
  const bin = stretch.anchor + floorTo(start - stretch.anchor, hourMs);
  return Math.min(bin + hourMs, stretch.lastStart > bin ? Infinity : stretch.until);
}

/** The calendar day `YYYY-MM-DD` that the wall clock shows at a moment. */
export function localDay(rules: ZoneRules, at: number): string {
  return new Date(floorTo(localClock(rules, at), dayMs)).toISOString().slice(0, 10);
}
