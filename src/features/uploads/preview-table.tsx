import type { FileKind } from '../../../shared/contracts/plan.ts';
import { rowReasonSentence } from '../../../shared/row-reasons.ts';
import type { UploadPreview } from '../../../shared/contracts/uploads.ts';
import { formatMoment } from '../../lib/format.ts';
import { DataTable, type Column } from '../../ui/data-table.tsx';

type Row = UploadPreview['rows'][number];

const shownRows = 20;

/** What the place of a row is called. */
const lineWords: Readonly<Record<FileKind, string>> = {
  text: 'line',
  workbook: 'row',
  xes: 'event',
};

/** The first rows of the file as they would be read. */
export function PreviewTable({
  rows,
  fileKind,
  timeZone,
}: {
  rows: readonly Row[];
  fileKind: FileKind;
  timeZone: string;
}) {
  const columns: Column<Row>[] = [
    { id: 'line', header: lineWords[fileKind], figure: true, value: (row) => row.line },
    {
      id: 'outcome',
      header: 'read as',
      value: (row) => row.outcome,
      cell: (row) =>
        row.outcome === 'accepted' ? (
          'accepted'
        ) : (
          <span className={row.outcome === 'refused' ? 'text-over' : 'text-soft'}>
            {row.outcome}: {row.reason ? rowReasonSentence(row.reason) : ''}
          </span>
        ),
    },
    { id: 'job', header: 'job', value: (row) => row.job },
    { id: 'area', header: 'area', value: (row) => row.area },
    {
      id: 'arrived',
      header: 'arrival',
      value: (row) => row.arrived,
      cell: (row) => formatMoment(row.arrived, timeZone),
    },
    {
      id: 'started',
      header: 'start',
      value: (row) => row.started,
      cell: (row) => formatMoment(row.started, timeZone),
    },
    {
      id: 'finished',
      header: 'finish',
      value: (row) => row.finished,
      cell: (row) => formatMoment(row.finished, timeZone),
    },
    { id: 'cells', header: 'the row as it came', value: (row) => row.cells.join(' | ') },
  ];
  return (
    <DataTable label="The first rows as read" columns={columns} rows={rows.slice(0, shownRows)} />
  );
}
