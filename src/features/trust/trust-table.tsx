import { Link } from 'react-router-dom';
import type { TrustCell } from '../../../shared/contracts/trust.ts';
import { formatCalendarDay } from '../../lib/format.ts';
import { DataTable, type Column } from '../../ui/data-table.tsx';

/** Every area on every day of the period, with its grade and why. */
export function TrustTable({
  areas,
  cells,
  linkTo,
}: {
  areas: readonly { id: number; name: string }[];
  cells: readonly TrustCell[];
  linkTo: (zoneId: number) => string;
}) {
  const names = new Map(areas.map((area) => [area.id, area.name]));
  const nameOf = (cell: TrustCell) => names.get(cell.zoneId) ?? '';
  const columns: Column<TrustCell>[] = [
    {
      id: 'area',
      header: 'area',
      value: nameOf,
      cell: (cell) => <Link to={linkTo(cell.zoneId)}>{nameOf(cell)}</Link>,
    },
    {
      id: 'day',
      header: 'day',
      value: (cell) => cell.day,
      cell: (cell) => formatCalendarDay(cell.day),
    },
    { id: 'grade', header: 'grade', value: (cell) => cell.grade },
    {
      id: 'why',
      header: 'why',
      value: (cell) => cell.reasons.map((reason) => reason.text).join(' '),
    },
  ];
  return (
    <DataTable
      label="Grades of areas by days"
      columns={columns}
      rows={cells}
      fileName="trust-map.csv"
      filterLabel="Rows with"
    />
  );
}
