import { Link } from 'react-router-dom';
import type { JobRecord } from '../../../shared/contracts/jobs.ts';
import { formatCount, formatDay, formatDuration, formatMoment } from '../../lib/format.ts';
import { recordAnchor } from './record-in-words.ts';

const headers = [
  ['area', false],
  ['entered', false],
  ['started', false],
  ['left', false],
  ['waiting', true],
  ['in process', true],
  ['flow time', true],
  ['also told', false],
  ['told by', false],
] as const;

type RowLink = (uploadId: number, line: number) => string;

/** The records of a job in order: the table behind the lanes, each record with the rows that told of it. */
export function JobRecords({
  records,
  timeZone,
  rowLink,
}: {
  records: readonly JobRecord[];
  timeZone: string;
  rowLink: RowLink;
}) {
  return (
    <div className="overflow-x-auto" tabIndex={0} role="region" aria-label="Records">
      <table className="w-full" aria-label="Records of the job, in order">
        <thead>
          <tr className="border-b border-ink text-soft">
            {headers.map(([header, isFigure]) => (
              <th
                key={header}
                scope="col"
                className={`px-2 py-1.5 align-bottom ${isFigure ? 'text-right' : 'text-left'}`}
              >
                {header}
              </th>
            ))}
          </tr>
        </thead>
        <tbody>
          {records.map((record) => (
            <RecordRow
              key={recordAnchor(record)}
              record={record}
              timeZone={timeZone}
              rowLink={rowLink}
            />
          ))}
        </tbody>
      </table>
    </div>
  );
}

function RecordRow({
  record,
  timeZone,
  rowLink,
}: {
  record: JobRecord;
  timeZone: string;
  rowLink: RowLink;
}) {
  const moments = [record.entered, record.started].map((at) => formatMoment(at, timeZone));
  const left =
    record.left === null
      ? 'still inside'
      : `${formatMoment(record.left, timeZone)}${record.finishInferred ? ' (inferred)' : ''}${record.ending ? `, ${record.ending}` : ''}`;
  const lengths = [record.queueSeconds, record.processSeconds, record.flowSeconds];
  return (
    <tr id={recordAnchor(record)} className="border-b border-hair align-top target:bg-mist">
      <th scope="row" className="px-2 py-1 text-left font-medium whitespace-nowrap">
        {record.areaName}
        {record.pass > 1 ? <span className="text-soft"> · pass {record.pass}</span> : null}
      </th>
      {[...moments, left].map((moment, index) => (
        <td key={headers[index + 1]?.[0]} className="px-2 py-1 whitespace-nowrap">
          {moment}
        </td>
      ))}
      {lengths.map((seconds, index) => (
        <td key={headers[index + 4]?.[0]} className="px-2 py-1 text-right whitespace-nowrap">
          {formatDuration(seconds)}
        </td>
      ))}
      <td className="px-2 py-1 whitespace-nowrap text-soft">{toldBeside(record, timeZone)}</td>
      <td className="px-2 py-1">
        <ToldBy record={record} rowLink={rowLink} />
      </td>
    </tr>
  );
}

/** The rows that told of a record, earliest first: the last is the one that holds. */
function ToldBy({ record, rowLink }: { record: JobRecord; rowLink: RowLink }) {
  return (
    <ul>
      {record.versions.map((version) => (
        <li key={`${version.uploadId} ${version.line}`} className="whitespace-nowrap">
          <Link to={rowLink(version.uploadId, version.line)}>
            {version.fileName}, line {version.line}
          </Link>{' '}
          <span className="text-soft">
            {version.event ? `${version.event}, ` : ''}
            {version.outcome === 'same' ? 'same as before' : version.outcome}
          </span>
        </li>
      ))}
    </ul>
  );
}

const names: Record<string, string> = { workContent: 'work content', record: 'record id' };

function toldBeside({ quantity, told }: JobRecord, timeZone: string): string {
  const parts = Object.entries(told).map(([name, value]) =>
    name === 'due' ? `due ${formatDay(value, timeZone)}` : `${names[name] ?? name} ${value}`,
  );
  return [...(quantity === null ? [] : [`quantity ${formatCount(quantity)}`]), ...parts].join(', ');
}
