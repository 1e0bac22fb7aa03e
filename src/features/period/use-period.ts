import { useMemo } from 'react';
import { useSearchParams } from 'react-router-dom';
import type { Site } from '../../../shared/contracts/sites.ts';
import { dayMs, stepBorders, zoneRules, type ZoneRules } from '../../../shared/local-time.ts';

export interface Period {
  from: string;
  to: string;
}

const weekMs = 7 * dayMs;
const usualWeeks = 4;

/** The period in view and the unit: read from the address, and written to it, here only. */
export function usePeriod(site: Site) {
  const [search, setSearch] = useSearchParams();
  const rules = zoneRules(site.timeZone);
  const usual = useMemo(() => usualPeriod(site), [site]);
  const [from, to] = [search.get('from'), search.get('to')];
  const period =
    from !== null && to !== null && Date.parse(from) < Date.parse(to) ? { from, to } : usual;
  const unit: 'jobs' | 'units' = search.get('unit') === 'units' ? 'units' : 'jobs';
  const set = (changes: Record<string, string>, options?: { replace: boolean }) =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      for (const [name, value] of Object.entries(changes)) next.set(name, value);
      return next;
    }, options);
  return {
    period,
    unit,
    /** What links carry along, so that the period stays from screen to screen. */
    search: search.size > 0 ? `?${search.toString()}` : '',
    /** `replace` leaves no step in the history, where many small ones follow each other. */
    setPeriod: (next: Period, options?: { replace: boolean }) => set({ ...next }, options),
    setUnit: (next: 'jobs' | 'units') => set({ unit: next }),
    weeksUntilNow: (weeks: number) => set({ ...lastWeeks(site, rules, weeks) }),
    everything: () => set({ ...whole(site, rules) }),
    shift: (direction: -1 | 1) => set({ ...shifted(period, rules, direction) }),
  };
}

const iso = (at: number) => new Date(at).toISOString();
const bordersOf = (rules: ZoneRules, step: 'day' | 'week', from: number, to: number) => {
  const borders = stepBorders(rules, step, from, to);
  return { from: borders[0] ?? from, to: borders.at(-1) ?? to };
};

/** The last four whole weeks; all that there is, where there is less. */
export function usualPeriod(site: Site): Period {
  const rules = zoneRules(site.timeZone);
  if (site.dataFrom === null || site.dataUntil === null) return lastWeeks(site, rules, usualWeeks);
  const long = Date.parse(site.dataUntil) - Date.parse(site.dataFrom) > (usualWeeks + 1) * weekMs;
  return long ? lastWeeks(site, rules, usualWeeks) : whole(site, rules);
}

/** Whole ISO weeks up to the one in which the data end; that one too where they reach its last day. */
function lastWeeks(site: Site, rules: ZoneRules, weeks: number): Period {
  const until = site.dataUntil === null ? Date.now() : Date.parse(site.dataUntil);
  const week = bordersOf(rules, 'week', until - 1, until);
  const end = week.to - until <= dayMs ? week.to : week.from;
  const start = bordersOf(rules, 'week', end - weeks * weekMs + dayMs / 2, end);
  return { from: iso(start.from), to: iso(end) };
}

function whole(site: Site, rules: ZoneRules): Period {
  if (site.dataFrom === null || site.dataUntil === null) return lastWeeks(site, rules, usualWeeks);
  const days = bordersOf(rules, 'day', Date.parse(site.dataFrom), Date.parse(site.dataUntil) + 1);
  return { from: iso(days.from), to: iso(days.to) };
}

/** The same number of days, earlier or later. */
function shifted(period: Period, rules: ZoneRules, direction: -1 | 1): Period {
  const [from, to] = [Date.parse(period.from), Date.parse(period.to)];
  const days = Math.max(1, Math.round((to - from) / dayMs)) * direction;
  const moved = (at: number) => bordersOf(rules, 'day', at + days * dayMs + dayMs / 4, at).from;
  return { from: iso(moved(from)), to: iso(moved(to)) };
}
