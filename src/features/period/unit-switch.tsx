import { useId } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { usePeriod } from './use-period.ts';

/** Whether figures count jobs, or the units that jobs carry. */
export function UnitSwitch({ site }: { site: Site }) {
  const { unit, setUnit } = usePeriod(site);
  const id = useId();
  return (
    <span className="no-print flex items-center gap-2">
      <label htmlFor={id} className="text-soft">
        count
      </label>
      <select
        id={id}
        value={unit}
        onChange={(event) => setUnit(event.target.value === 'units' ? 'units' : 'jobs')}
        className="border-b border-ink bg-paper py-1 text-ink"
      >
        <option value="jobs">jobs</option>
        <option value="units">units</option>
      </select>
    </span>
  );
}
