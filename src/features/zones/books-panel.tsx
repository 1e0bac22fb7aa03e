import type { Summary } from '../../../shared/contracts/figures.ts';
import { formatCount, inUnit } from '../../lib/format.ts';
import { FigureList } from '../../ui/figure-list.tsx';
import { PanelHeading } from '../../ui/heading.tsx';

/** Who was there, came, left, and is there: the two sides are counted apart. */
export function BooksPanel({ summary }: { summary: Summary }) {
  const { wipStart, arrivals, departures, wipEnd, balance } = summary.books;
  return (
    <section className="flex flex-col gap-1">
      <PanelHeading>Do the books balance?</PanelHeading>
      <FigureList
        rows={[
          [
            `${formatCount(wipStart)} + ${formatCount(arrivals)} in − ${formatCount(departures)} out`,
            formatCount(wipStart + arrivals - departures),
          ],
          ['counted inside at the end', inUnit(wipEnd, summary.unit)],
          ['the books', balance ? 'balance' : 'do not balance'],
        ]}
      />
    </section>
  );
}
