import { Link } from 'react-router-dom';
import type { VoidedRow } from '../../../shared/contracts/jobs.ts';
import { formatMoment } from '../../lib/format.ts';
import { PanelHeading } from '../../ui/heading.tsx';

/** Rows that told of a job and no longer hold, each with the upload that replaced its period. */
export function VoidedRows({
  rows,
  timeZone,
  rowLink,
}: {
  rows: readonly VoidedRow[];
  timeZone: string;
  rowLink: (uploadId: number, line: number) => string;
}) {
  if (rows.length === 0) return null;
  return (
    <section>
      <PanelHeading>Rows that no longer hold</PanelHeading>
      <ul>
        {rows.map((row) => (
          <li
            key={`${row.uploadId} ${row.line} ${row.areaName}`}
            className="border-b border-hair py-2"
          >
            {row.areaName}, {formatMoment(row.started ?? row.arrived ?? row.finished, timeZone)}:{' '}
            <Link to={rowLink(row.uploadId, row.line)}>
              {row.fileName}, line {row.line}
            </Link>{' '}
            <span className="text-soft">
              voided by upload {row.voidedBy}, which replaces this period and does not carry it
            </span>
          </li>
        ))}
      </ul>
    </section>
  );
}
