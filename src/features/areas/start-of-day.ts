import { readLocal, stepBorders, zoneRules } from '../../../shared/local-time.ts';

/** Days that can be named: those for which local time is known. */
export const firstDay = '1950-01-01';
export const lastDay = '2099-12-31';

/** The moment at which a day `YYYY-MM-DD` begins at the site; null where that is no such day. */
export function startOfDay(day: string, timeZone: string): string | null {
  if (!/^\d{4}-\d{2}-\d{2}$/.test(day) || day < firstDay || day > lastDay) return null;
  const noon = Date.parse(`${day}T12:00:00Z`);
  if (Number.isNaN(noon) || !new Date(noon).toISOString().startsWith(day)) return null;
  const rules = zoneRules(timeZone);
  const { at } = readLocal(rules, noon);
  const [start] = stepBorders(rules, 'day', at, at + 1);
  return start === undefined ? null : new Date(start).toISOString();
}
