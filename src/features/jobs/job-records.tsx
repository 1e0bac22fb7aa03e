import { Link } from 'react-router-dom';
import type { JobRecord } from '../../../shared/contracts/jobs.ts';
import { formatCount, formatDuration, formatMoment } from '../../lib/format.ts';
import { FigureList } from '../../ui/figure-list.tsx';

/** The records of a job in order, each with what told of it. */
export function JobRecords({
  records,
  timeZone,
  rowLink,
}: {
  records: readonly JobRecord[];
  timeZone: string;
  rowLink: (uploadId: number, line: number) => string;
}) {
  return (
    <ol className="flex flex-col">
      {records.map((record) => (
        <li
          key={`${record.record.uploadId} ${record.record.line} ${record.areaId}`}
          className="grid gap-x-8 gap-y-2 border-b border-hair py-4 md:grid-cols-3"
        >
          <div>
            <h3 className="font-bold">{record.areaName}</h3>
            {record.pass > 1 ? <p className="text-soft">pass {record.pass}</p> : null}
            <FigureList
              rows={[
                ['waiting', formatDuration(record.queueSeconds)],
                ['in process', formatDuration(record.processSeconds)],
                ['flow time', formatDuration(record.flowSeconds)],
                ...(record.quantity === null
                  ? []
                  : [['quantity', formatCount(record.quantity)] as const]),
                ...Object.entries(record.told),
              ]}
            />
          </div>
          <FigureList
            rows={[
              ['entered', formatMoment(record.entered, timeZone)],
              ['arrived', formatMoment(record.arrived, timeZone)],
              ['started', formatMoment(record.started, timeZone)],
              [
                'left',
                record.left === null
                  ? 'still inside'
                  : formatMoment(record.left, timeZone) +
                    (record.finishInferred ? ' (inferred from a later start)' : ''),
              ],
            ]}
          />
          <div>
            <p className="text-soft">Told by</p>
            <ul>
              {record.versions.map((version) => (
                <li key={`${version.uploadId} ${version.line}`}>
                  <Link to={rowLink(version.uploadId, version.line)}>
                    {version.fileName}, line {version.line}
                  </Link>{' '}
                  <span className="text-soft">
                    {version.outcome === 'same' ? 'same as before' : version.outcome}
                  </span>
                </li>
              ))}
            </ul>
          </div>
        </li>
      ))}
    </ol>
  );
}
