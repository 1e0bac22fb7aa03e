import { useId } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { localDay, readLocal, stepBorders, zoneRules } from '../../../shared/local-time.ts';
import { formatPeriod } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { usePeriod } from './use-period.ts';

/** The period in view: stepped, set to whole weeks or to everything, or chosen by its first and last day. */
export function PeriodBar({ site }: { site: Site }) {
  const { period, unit, setPeriod, setUnit, weeksUntilNow, everything, shift } = usePeriod(site);
  const rules = zoneRules(site.timeZone);
  const id = useId();
  const first = localDay(rules, Date.parse(period.from));
  const last = localDay(rules, Date.parse(period.to) - 1);
  const setDays = (from: string, to: string) => {
    if (!from || !to || from > to) return;
    const start = readLocal(rules, Date.parse(`${from}T00:00:00Z`)).at;
    const end = stepBorders(
      rules,
      'day',
      start,
      readLocal(rules, Date.parse(`${to}T12:00:00Z`)).at,
    ).at(-1);
    setPeriod({
      from: new Date(start).toISOString(),
      to: new Date(end ?? start).toISOString(),
    });
  };
  return (
    <section
      aria-label="Period"
      className="no-print flex flex-wrap items-center gap-x-4 gap-y-2 border-b border-ink px-4 py-2"
    >
      <strong className="min-w-56">{formatPeriod(period.from, period.to, site.timeZone)}</strong>
      <div className="flex gap-2">
        <Button onPress={() => shift(-1)}>Earlier</Button>
        <Button onPress={() => shift(1)}>Later</Button>
      </div>
      <div className="flex gap-2">
        <Button onPress={() => weeksUntilNow(1)}>Week</Button>
        <Button onPress={() => weeksUntilNow(4)}>4 weeks</Button>
        <Button onPress={everything}>All</Button>
      </div>
      <div className="flex items-center gap-2">
        <label htmlFor={`${id}-from`}>from</label>
        <input
          id={`${id}-from`}
          type="date"
          value={first}
          onChange={(event) => setDays(event.target.value, last)}
          className="border border-soft bg-white px-1 py-1 text-ink"
        />
        <label htmlFor={`${id}-to`}>to</label>
        <input
          id={`${id}-to`}
          type="date"
          value={last}
          onChange={(event) => setDays(first, event.target.value)}
          className="border border-soft bg-white px-1 py-1 text-ink"
        />
      </div>
      <div className="flex items-center gap-2">
        <label htmlFor={`${id}-unit`}>in</label>
        <select
          id={`${id}-unit`}
          value={unit}
          onChange={(event) => setUnit(event.target.value === 'units' ? 'units' : 'jobs')}
          className="border border-soft bg-white px-1 py-1 text-ink"
        >
          <option value="jobs">jobs</option>
          <option value="units">units</option>
        </select>
      </div>
    </section>
  );
}
