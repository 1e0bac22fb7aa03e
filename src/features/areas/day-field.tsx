import { useId } from 'react';
import { firstDay, lastDay } from './start-of-day.ts';

/** A day of the site's calendar, typed or picked; what is no day is said so. */
export function DayField({
  label,
  value,
  isWrong,
  onChange,
}: {
  label: string;
  value: string;
  isWrong: boolean;
  onChange: (value: string) => void;
}) {
  const id = useId();
  return (
    <div className="flex flex-col gap-1">
      <label htmlFor={id} className="text-soft">
        {label}
      </label>
      <input
        id={id}
        type="date"
        min={firstDay}
        max={lastDay}
        value={value}
        aria-invalid={isWrong}
        aria-describedby={isWrong ? `${id}-wrong` : undefined}
        onChange={(event) => onChange(event.target.value)}
        className="self-start border border-soft bg-white px-2 py-1.5 text-ink aria-invalid:border-over"
      />
      {isWrong ? (
        <span id={`${id}-wrong`} className="text-label text-over">
          Use a day from 1950 to 2099.
        </span>
      ) : null}
    </div>
  );
}
