import { localDay, stepBorders, type ZoneRules } from '../../shared/local-time.ts';
import { monthNames } from '../lib/format.ts';

/** A stretch of time laid out over a width: moments to places and back. */
export interface RulerScale {
  from: number;
  to: number;
  width: number;
}

/** The place of a moment; moments outside lie at the ends. */
export function placeOn({ from, to, width }: RulerScale, at: number): number {
  const share = (at - from) / (to - from);
  return Math.min(1, Math.max(0, share)) * width;
}

/** The moment at a place; places outside mean the ends. */
export function momentOn({ from, to, width }: RulerScale, x: number): number {
  const share = Math.min(1, Math.max(0, x / width));
  return from + share * (to - from);
}

/** The border nearest to a moment. @param borders moments in order, at least one */
export function nearest(borders: readonly number[], at: number): number {
  let [low, high] = [0, borders.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((borders[middle] ?? 0) < at) low = middle + 1;
    else high = middle;
  }
  const [before, after] = [borders[low - 1], borders[low]];
  if (before === undefined || after === undefined) return after ?? before ?? at;
  return at - before < after - at ? before : after;
}

export interface RulerTick {
  x: number;
  long: boolean;
}

const leastTickGap = 4;

/** Ticks at the starts of local days and, longer, of ISO weeks; whichever would crowd are left out. */
export function rulerTicks(scale: RulerScale, rules: ZoneRules): RulerTick[] {
  const at = (step: 'day' | 'week') =>
    stepBorders(rules, step, scale.from, scale.to).filter(
      (border) => border >= scale.from && border <= scale.to,
    );
  const weeks = at('week');
  const roomy = (count: number) => scale.width / Math.max(1, count) >= leastTickGap;
  const days = at('day');
  const starts = new Set(weeks);
  return [
    ...(roomy(days.length)
      ? days
          .filter((day) => !starts.has(day))
          .map((day) => ({ x: placeOn(scale, day), long: false }))
      : []),
    ...(roomy(weeks.length) ? weeks.map((week) => ({ x: placeOn(scale, week), long: true })) : []),
  ];
}

const roomForLabel = 64;

/** Names of months where they begin; the year stands with January and with the first. Crowded ones are left out. */
export function rulerLabels(scale: RulerScale, rules: ZoneRules): { x: number; text: string }[] {
  const begun = stepBorders(rules, 'day', scale.from, scale.to)
    .filter((day) => day >= scale.from && day < scale.to)
    .map((day) => ({ x: placeOn(scale, day), name: localDay(rules, day) }))
    .filter(({ name }, index) => index === 0 || name.endsWith('-01'));
  const monthWidth = scale.width / Math.max(1, begun.length);
  const every = [1, 2, 3, 6, 12].find((step) => monthWidth * step >= roomForLabel) ?? 12;
  const [partial, ...months] = begun.filter(
    ({ x, name }, index) =>
      (index === 0 || (Number(name.slice(5, 7)) - 1) % every === 0) &&
      scale.width - x >= roomForLabel,
  );
  // The month in which the span begins gives way to one that begins soon after.
  const crowded = partial && months[0] && months[0].x - partial.x < roomForLabel;
  return [...(partial && !crowded ? [partial] : []), ...months].map(({ x, name }, index) => ({
    x,
    text: monthName(name, index === 0),
  }));
}

function monthName(day: string, withYear: boolean): string {
  const month = Number(day.slice(5, 7));
  const name = monthNames[month - 1] ?? '';
  return withYear || month === 1 ? `${name} ${day.slice(0, 4)}` : name;
}
