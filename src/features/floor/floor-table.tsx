import { Link } from 'react-router-dom';
import type { FloorRow } from '../../../shared/contracts/figures.ts';
import { formatCount, formatDuration, formatNumber, unknown } from '../../lib/format.ts';
import { DataTable, type Column } from '../../ui/data-table.tsx';

/** Every zone in order of flow, with its figures and its books. */
export function FloorTable({
  rows,
  days,
  linkTo,
  trustOf,
}: {
  rows: readonly FloorRow[];
  /** Length of the period, in days. */
  days: number;
  linkTo: (zoneId: number) => string;
  /** How well the data carry the figures of these areas, in short. */
  trustOf: (areaIds: readonly number[]) => string;
}) {
  const columns: Column<FloorRow & { data: string }>[] = [
    {
      id: 'zone',
      header: 'area',
      value: (row) => nameOf(row),
      cell: (row) => <Link to={linkTo(row.zone.id)}>{nameOf(row)}</Link>,
    },
    count('now', 'now', (row) => row.wipEnd),
    number('mean', 'mean', (row) => row.wipMean, 1),
    count('peak', 'peak', (row) => row.wipPeak),
    count('waiting', 'waiting', waitingNow),
    perDay('in', 'in / day', days, (row) => row.arrivals),
    perDay('out', 'out / day', days, (row) => row.departures),
    duration('p50', 'flow time P50', (row) => row.flowP50Seconds),
    duration('p85', 'P85', (row) => row.flowP85Seconds),
    duration('oldest', 'oldest inside', (row) => row.oldestInsideSeconds),
    {
      id: 'books',
      header: 'books',
      value: (row) => booksWord(row),
      cell: (row) => (
        <span
          title={`${formatCount(row.books.wipStart)} + ${formatCount(row.books.arrivals)} in − ${formatCount(row.books.departures)} out = ${formatCount(row.books.wipEnd)}`}
        >
          {booksWord(row)}
        </span>
      ),
    },
    { id: 'data', header: 'data', value: (row) => row.data },
  ];
  return (
    <DataTable
      label="Areas"
      columns={columns}
      // A part of the row: the table keeps what it once read of one.
      rows={rows.map((row) => ({ ...row, data: trustOf(row.zone.areaIds) || unknown }))}
      fileName="floor.csv"
      filterLabel="Rows with"
    />
  );
}

const nameOf = (row: FloorRow) => (row.zone.kind === 'site' ? 'Whole site' : row.zone.name);

const waitingNow = (row: FloorRow) =>
  row.wipEnd === null || row.inProcessEnd === null ? null : row.wipEnd - row.inProcessEnd;

const booksWord = (row: FloorRow) =>
  row.wipEnd === null ? unknown : row.books.balance ? 'balance' : 'do not balance';

type Read = (row: FloorRow) => number | null;

const count = (id: string, header: string, value: Read): Column<FloorRow> => ({
  id,
  header,
  figure: true,
  value,
  cell: (row) => formatCount(value(row)),
});

const number = (id: string, header: string, value: Read, places: number): Column<FloorRow> => ({
  id,
  header,
  figure: true,
  value,
  cell: (row) => formatNumber(value(row), places),
});

const duration = (id: string, header: string, value: Read): Column<FloorRow> => ({
  id,
  header,
  figure: true,
  value,
  cell: (row) => formatDuration(value(row)),
});

/** A count over the period as a rate. */
const perDay = (id: string, header: string, days: number, counted: Read): Column<FloorRow> => {
  const rate = (row: FloorRow) => {
    const value = counted(row);
    return value === null ? null : value / days;
  };
  return { id, header, figure: true, value: rate, cell: (row) => formatNumber(rate(row), 1) };
};
