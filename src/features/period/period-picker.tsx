import { useId, useState } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { localDay, readLocal, stepBorders, zoneRules } from '../../../shared/local-time.ts';
import { Button } from '../../ui/button.tsx';
import type { Period } from './use-period.ts';

/** The period by its first and last day, typed or picked. */
export function PeriodPicker({
  site,
  period,
  onPick,
}: {
  site: Site;
  period: Period;
  onPick: (period: Period) => void;
}) {
  const [isOpen, setOpen] = useState(false);
  const id = useId();
  return (
    <span
      onKeyDown={(event) => {
        if (event.key === 'Escape') setOpen(false);
      }}
    >
      <button
        type="button"
        aria-expanded={isOpen}
        aria-controls={id}
        onClick={() => setOpen(!isOpen)}
        className="min-h-6 cursor-pointer underline decoration-hair underline-offset-3 hover:text-ink hover:decoration-ink"
      >
        dates
      </button>
      {isOpen ? (
        <span id={id} className="absolute z-20 mt-1 block border border-ink bg-panel p-4 text-ink">
          <Days
            site={site}
            period={period}
            onPick={(picked) => {
              onPick(picked);
              setOpen(false);
            }}
          />
        </span>
      ) : null}
    </span>
  );
}

function Days({
  site,
  period,
  onPick,
}: {
  site: Site;
  period: Period;
  onPick: (period: Period) => void;
}) {
  const rules = zoneRules(site.timeZone);
  const id = useId();
  const [first, setFirst] = useState(localDay(rules, Date.parse(period.from)));
  const [last, setLast] = useState(localDay(rules, Date.parse(period.to) - 1));
  const inOrder = first !== '' && last !== '' && first <= last;
  const noon = (day: string) => readLocal(rules, Date.parse(`${day}T12:00:00Z`)).at;
  return (
    <form
      className="flex flex-col gap-3"
      onSubmit={(event) => {
        event.preventDefault();
        if (!inOrder) return;
        const borders = stepBorders(rules, 'day', noon(first), noon(last));
        onPick({
          from: new Date(borders[0] ?? 0).toISOString(),
          to: new Date(borders.at(-1) ?? 0).toISOString(),
        });
      }}
    >
      {[
        { name: 'From', value: first, set: setFirst },
        { name: 'To the end of', value: last, set: setLast },
      ].map(({ name, value, set }) => (
        <div key={name} className="flex items-center justify-between gap-3">
          <label htmlFor={`${id}-${name}`}>{name}</label>
          <input
            id={`${id}-${name}`}
            type="date"
            required
            min="1950-01-01"
            max="2099-12-31"
            value={value}
            onChange={(event) => set(event.target.value)}
            className="border border-soft bg-white px-1 py-1 text-ink"
          />
        </div>
      ))}
      {inOrder ? null : (
        <p role="alert" className="text-label text-over">
          The last day must not lie before the first.
        </p>
      )}
      <Button type="submit" kind="main" isDisabled={!inOrder}>
        Show these days
      </Button>
    </form>
  );
}
