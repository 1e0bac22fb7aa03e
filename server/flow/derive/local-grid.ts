import { sql, type SQL } from 'drizzle-orm';
import {
  hourStretches,
  localDay,
  stepBorders,
  type ZoneRules,
} from '../../../shared/local-time.ts';
import { instantValue } from '../instant-value.ts';

/** The local hour of moments in SQL: what to join to, which moments it takes, and the expression. */
export interface LocalHour {
  join: SQL;
  of: (at: SQL) => SQL;
}

/**
 * The local hour in which a moment lies, in SQL. Whole hours apart from one anchor, unless the clock moved
 * by a part of an hour somewhere in the span: then stretch by stretch.
 */
export function localHour(rules: ZoneRules, from: number, to: number): LocalHour {
  const stretches = hourStretches(rules, from, to);
  const [only] = stretches;
  if (stretches.length === 1 && only)
    return {
      join: sql``,
      of: (at) => sql`date_bin('1 hour', ${at}, ${instantValue(only.anchor)}::timestamptz)`,
    };
  const column = (pick: (each: (typeof stretches)[number]) => number) =>
    sql`${sql.param(stretches.map((each) => instantValue(pick(each))))}::timestamptz[]`;
  return {
    join: sql`join unnest(
      ${column((each) => each.from)},
      ${column((each) => each.until)},
      ${column((each) => each.anchor)},
      ${column((each) => each.lastStart)}
    ) as stretch (begins, until, anchor, last_start) on at >= begins and at < until`,
    of: (at) => sql`least(last_start, greatest(begins, date_bin('1 hour', ${at}, anchor)))`,
  };
}

/** Local days over a span: their calendar days, and their borders (one more than days). */
export interface DayGrid {
  days: string[];
  borders: number[];
}

export function dayGrid(rules: ZoneRules, from: number, to: number): DayGrid {
  const borders = stepBorders(rules, 'day', from, to);
  return { days: borders.slice(0, -1).map((border) => localDay(rules, border)), borders };
}

/** One row with the grid as sorted arrays: `days` and `borders`. */
export const dayGridRow = (grid: DayGrid): SQL => sql`
  select
    ${sql.param(grid.days)}::date[] as days,
    ${sql.param(grid.borders.map(instantValue))}::timestamptz[] as borders`;
