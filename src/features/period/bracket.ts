import { nearest } from '../../charts/ruler-scale.ts';

/** A period between two borders of days, in milliseconds. */
export interface Bracket {
  from: number;
  to: number;
}

/** What of the bracket is held: an end, all of it, or the place where a new one begins. */
export type Grip = 'from' | 'to' | 'both' | 'new';

/** The bracket after its grip was drawn from one moment to another; it keeps to days and at least one of them. */
export function moveBracket(
  days: readonly number[],
  before: Bracket,
  grip: Grip,
  start: number,
  end: number,
): Bracket {
  if (grip === 'new') return ordered(days, nearest(days, start), nearest(days, end));
  if (grip === 'from')
    return { from: Math.min(nearest(days, end), dayBefore(days, before.to)), to: before.to };
  if (grip === 'to')
    return { from: before.from, to: Math.max(nearest(days, end), dayAfter(days, before.from)) };
  const first = indexOf(days, before.from);
  const length = Math.max(1, indexOf(days, before.to) - first);
  const wanted = indexOf(days, nearest(days, before.from + end - start));
  const from = Math.min(Math.max(0, wanted), Math.max(0, days.length - 1 - length));
  return { from: days[from] ?? before.from, to: days[from + length] ?? days.at(-1) ?? before.to };
}

const week = 7;
const reach: Record<string, number> = {
  ArrowLeft: -1,
  ArrowDown: -1,
  ArrowRight: 1,
  ArrowUp: 1,
  PageDown: -week,
  PageUp: week,
  Home: -Infinity,
  End: Infinity,
};

/** The bracket after a key, or null where the key means nothing here. */
export function stepBracket(
  days: readonly number[],
  before: Bracket,
  grip: Grip,
  key: string,
): Bracket | null {
  const steps = reach[key];
  if (steps === undefined || days.length < 2) return null;
  const [first, last] = [indexOf(days, before.from), indexOf(days, before.to)];
  const [least, most] = [0, days.length - 1];
  const clamped = (index: number, low: number, high: number) =>
    days[Math.min(high, Math.max(low, index))] ?? 0;
  if (grip === 'from') return { from: clamped(first + steps, least, last - 1), to: before.to };
  if (grip === 'to') return { from: before.from, to: clamped(last + steps, first + 1, most) };
  const length = Math.max(1, last - first);
  const from = Math.min(most - length, Math.max(least, first + steps));
  return { from: days[from] ?? before.from, to: days[from + length] ?? before.to };
}

/** The place of the day border nearest to a moment. */
const indexOf = (days: readonly number[], at: number): number => days.indexOf(nearest(days, at));

const dayAfter = (days: readonly number[], at: number): number =>
  days[indexOf(days, at) + 1] ?? days.at(-1) ?? at;
const dayBefore = (days: readonly number[], at: number): number =>
  days[Math.max(0, indexOf(days, at) - 1)] ?? at;

function ordered(days: readonly number[], one: number, other: number): Bracket {
  const [from, to] = [Math.min(one, other), Math.max(one, other)];
  if (from < to) return { from, to };
  return from === days.at(-1)
    ? { from: dayBefore(days, from), to: from }
    : { from, to: dayAfter(days, from) };
}
