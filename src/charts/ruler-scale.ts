import { localDay, stepBorders, type ZoneRules } from '../../shared/local-time.ts';

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

const months = ['Jan', 'Feb', 'Mar', 'Apr', 'May', 'Jun', 'Jul', 'Aug', 'Sep', 'Oct', 'Nov', 'Dec'];
const leastLabelGap = 44;

/** Names of months where they begin; the year stands with January and with the first. Crowded ones are left out. */
export function rulerLabels(scale: RulerScale, rules: ZoneRules): { x: number; text: string }[] {
  const firsts = stepBorders(rules, 'day', scale.from, scale.to)
    .filter((day) => day >= scale.from && day < scale.to)
    .map((day) => ({ at: day, name: localDay(rules, day) }))
    .filter(({ name }, index) => index === 0 || name.endsWith('-01'));
  const perYear = (12 * scale.width) / Math.max(1, firsts.length);
  const every = [1, 2, 3, 6, 12].find((step) => (perYear / 12) * step >= leastLabelGap) ?? 12;
  const labels: { x: number; text: string }[] = [];
  for (const [index, { at, name }] of firsts.entries()) {
    const month = Number(name.slice(5, 7));
    if (index > 0 && (month - 1) % every !== 0) continue;
    const x = placeOn(scale, at);
    const withYear = index === 0 || month === 1;
    const room = withYear ? leastLabelGap * 1.6 : leastLabelGap;
    if (scale.width - x < room) continue;
    const before = labels.at(-1);
    // The first label gives way to a month that begins just after it.
    if (before && x - before.x < leastLabelGap * 1.6 && labels.length === 1) labels.pop();
    labels.push({
      x,
      text: `${months[month - 1] ?? ''}${withYear || labels.length === 0 ? ` ${name.slice(0, 4)}` : ''}`,
    });
  }
  return labels;
}
