import { useId } from 'react';

export interface Choice {
  value: string;
  label: string;
}

/** One of a few choices: the platform's own list, which every keyboard and tablet knows. */
export function Select({
  label,
  value,
  choices,
  onChange,
  hint,
}: {
  label: string;
  value: string;
  choices: readonly Choice[];
  onChange: (value: string) => void;
  hint?: string;
}) {
  const id = useId();
  return (
    <div className="flex flex-col gap-1">
      <label htmlFor={id} className="text-soft">
        {label}
      </label>
      <select
        id={id}
        value={value}
        onChange={(event) => onChange(event.target.value)}
        aria-describedby={hint ? `${id}-hint` : undefined}
        className="border border-soft bg-white px-2 py-1.5 text-ink"
      >
        {choices.map((choice) => (
          <option key={choice.value} value={choice.value}>
            {choice.label}
          </option>
        ))}
      </select>
      {hint ? (
        <span id={`${id}-hint`} className="text-label text-soft">
          {hint}
        </span>
      ) : null}
    </div>
  );
}
