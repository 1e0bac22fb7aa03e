import { Fragment, useState, type KeyboardEvent } from 'react';
import { Link } from 'react-router-dom';
import type { TrustCell } from '../../../shared/contracts/trust.ts';
import { trustGrades, trustMeanings, type TrustGrade } from '../../../shared/trust.ts';
import { GradeSwatch } from '../../charts/grade-swatch.tsx';
import { TrustChart, trustNamesWidth, type TrustRow } from '../../charts/trust-chart.tsx';
import { foldDays, type TrustColumn } from '../../charts/trust-layout.ts';
import { useWidth } from '../../charts/use-width.ts';
import { formatCalendarDay } from '../../lib/format.ts';
import { fieldInWords, rowInWords } from './trust-in-words.ts';

interface Area {
  id: number;
  name: string;
}

/**
 * Areas by days in the hatching of their grades. An area's name opens its page; with the arrow keys on it, or
 * by pointing, a field is chosen and told in words below.
 */
export function TrustPicture({
  areas,
  cells,
  linkTo,
}: {
  areas: readonly Area[];
  cells: readonly TrustCell[];
  linkTo: (zoneId: number) => string;
}) {
  const [holder, width] = useWidth<HTMLDivElement>();
  const [chosen, setChosen] = useState<{ rowId: number; column: number } | null>(null);
  const days = [...new Set(cells.map((cell) => cell.day))].sort();
  const columns = foldDays(days, width - trustNamesWidth);
  const rows = areas
    .map((area) => rowOf(area, days, cells))
    .filter((row) => row.grades.some((grade) => grade !== null));
  const column = chosen ? columns[chosen.column] : undefined;
  const move = (rowId: number) => (event: KeyboardEvent) => {
    const step = { ArrowLeft: -1, ArrowRight: 1 }[event.key];
    if (step === undefined) return;
    event.preventDefault();
    const before = chosen?.rowId === rowId ? chosen.column : step > 0 ? -1 : columns.length;
    setChosen({ rowId, column: Math.min(columns.length - 1, Math.max(0, before + step)) });
  };
  return (
    <section aria-label="Areas by days" className="flex flex-col gap-2">
      <div ref={holder}>
        {width > trustNamesWidth ? (
          <TrustChart
            rows={rows}
            columns={columns}
            width={width}
            chosen={chosen}
            formatColumn={(each) => columnName(days, each)}
            onPick={(rowId, at) => setChosen({ rowId, column: at })}
            wrapRow={(row, picture) => (
              <Link
                to={linkTo(row.id)}
                className="group no-underline"
                onKeyDown={move(row.id)}
                aria-describedby="trust-keys"
              >
                <g role="img" aria-label={rowInWords(row)}>
                  {picture}
                </g>
              </Link>
            )}
          />
        ) : null}
      </div>
      <p id="trust-keys" className="text-label text-soft">
        Choose a field to read why, by pointing or with the arrow keys on an area’s name.
        {columns.length < days.length
          ? ' A field is a week or more here, split by how many of its days have which grade.'
          : ''}
      </p>
      <p role="status" className="min-h-10 border-t border-hair pt-1 text-label">
        {chosen && column
          ? fieldInWords(
              areas.find((area) => area.id === chosen.rowId)?.name ?? '',
              days.slice(column.first, column.last + 1),
              cells.filter((cell) => cell.zoneId === chosen.rowId),
            )
          : null}
      </p>
      <Legend />
    </section>
  );
}

function rowOf({ id, name }: Area, days: readonly string[], cells: readonly TrustCell[]): TrustRow {
  const byDay = new Map<string, TrustGrade>(
    cells.filter((cell) => cell.zoneId === id).map((cell) => [cell.day, cell.grade]),
  );
  return { id, name, grades: days.map((day) => byDay.get(day) ?? null) };
}

/** The first day of a field, without its year. */
const columnName = (days: readonly string[], { first }: TrustColumn): string =>
  formatCalendarDay(days[first] ?? '').replace(/ \d{4}$/, '');

function Legend() {
  return (
    <dl className="grid grid-cols-[auto_minmax(0,1fr)] gap-x-4 gap-y-1 text-label">
      {[...trustGrades].reverse().map((grade) => (
        <Fragment key={grade}>
          <dt className="flex items-baseline gap-2 font-bold">
            <GradeSwatch grade={grade} />
            {grade}
          </dt>
          <dd className="text-soft">{trustMeanings[grade]}</dd>
        </Fragment>
      ))}
    </dl>
  );
}
