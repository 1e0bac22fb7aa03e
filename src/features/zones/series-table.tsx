import type { SeriesPoint } from '../../../shared/contracts/figures.ts';
import { formatCount, formatDuration, formatMoment, formatNumber } from '../../lib/format.ts';
import { DataTable, type Column } from '../../ui/data-table.tsx';

/** The figures behind the charts. */
export function SeriesTable({
  points,
  timeZone,
}: {
  points: readonly SeriesPoint[];
  timeZone: string;
}) {
  const columns: Column<SeriesPoint>[] = [
    {
      id: 'start',
      header: 'from',
      value: (point) => point.start,
      cell: (point) => formatMoment(point.start, timeZone),
    },
    figure('wipMean', 'mean', (value) => formatNumber(value, 1)),
    figure('wipPeak', 'peak', formatCount),
    figure('inProcessMean', 'in process, mean', (value) => formatNumber(value, 1)),
    figure('arrivals', 'in', formatCount),
    figure('departures', 'out', formatCount),
    ...(points.some((point) => (point.scrapped ?? 0) + (point.cancelled ?? 0) > 0)
      ? [
          figure('scrapped', 'of these scrapped', formatCount),
          figure('cancelled', 'cancelled', formatCount),
        ]
      : []),
    figure('flowMeanSeconds', 'flow time, mean', formatDuration),
    figure('flowP50Seconds', 'P50', formatDuration),
    figure('flowP85Seconds', 'P85', formatDuration),
    figure('flowP95Seconds', 'P95', formatDuration),
  ];
  return (
    <DataTable label="Figures by step" columns={columns} rows={points} fileName="series.csv" />
  );
}

type Name = Exclude<keyof SeriesPoint, 'start' | 'end'>;

const figure = (
  name: Name,
  header: string,
  show: (value: number | null) => string,
): Column<SeriesPoint> => ({
  id: name,
  header,
  figure: true,
  value: (point) => point[name],
  cell: (point) => show(point[name]),
});
