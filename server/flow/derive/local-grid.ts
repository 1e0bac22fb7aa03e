import { sql, type SQL } from 'drizzle-orm';
import {
  hourStretches,
  localDay,
  stepBorders,
  type ZoneRules,
} from '../../../shared/local-time.ts';
import { instantValue } from '../instant-value.ts';

/** Rows (begins, until, anchor, last_start): the stretches from which a moment's local hour is told. */
export function hourStretchRows(rules: ZoneRules, from: number, to: number): SQL {
  const stretches = hourStretches(rules, from, to);
  const column = (pick: (each: (typeof stretches)[number]) => number) =>
    sql`${sql.param(stretches.map((each) => instantValue(pick(each))))}::timestamptz[]`;
  return sql`select * from unnest(
    ${column((each) => each.from)},
    ${column((each) => each.until)},
    ${column((each) => each.anchor)},
    ${column((each) => each.lastStart)}
  ) as stretch (begins, until, anchor, last_start)`;
}

/** The local hour of a moment `at` joined to `hour_stretch`. */
export const hourOf = (at: SQL): SQL =>
  sql`least(last_start, greatest(begins, date_bin('1 hour', ${at}, anchor)))`;

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
