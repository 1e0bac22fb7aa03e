import type { ReactNode } from 'react';

/** Labels with their figures, one under the other. */
export function FigureList({
  rows,
}: {
  rows: readonly (readonly [label: string, figure: ReactNode])[];
}) {
  return (
    <dl className="flex flex-col">
      {rows.map(([label, figure]) => (
        <div key={label} className="flex justify-between gap-4 py-0.5">
          <dt className="text-soft">{label}</dt>
          <dd className="text-right">{figure}</dd>
        </div>
      ))}
    </dl>
  );
}
