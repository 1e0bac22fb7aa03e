import { useId, useState } from 'react';
import { Button as AriaButton, Dialog, DialogTrigger, Popover } from 'react-aria-components';
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
  return (
    <DialogTrigger>
      <AriaButton className="min-h-6 cursor-pointer underline decoration-hair underline-offset-3 hover:text-ink hover:decoration-ink">
        dates
      </AriaButton>
      <Popover placement="bottom start" className="border border-ink bg-panel p-4">
        <Dialog aria-label="First and last day" className="outline-none">
          {({ close }) => (
            <Days
              site={site}
              period={period}
              onPick={(picked) => {
                onPick(picked);
                close();
              }}
            />
          )}
        </Dialog>
      </Popover>
    </DialogTrigger>
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
        { name: 'First day', value: first, set: setFirst },
        { name: 'Last day', value: last, set: setLast },
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
