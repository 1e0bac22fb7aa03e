import { useState } from 'react';
import type { JobRecord } from '../../../shared/contracts/jobs.ts';
import { zoneRules } from '../../../shared/local-time.ts';
import { LanesChart, laneNamesWidth } from '../../charts/lanes-chart.tsx';
import { layoutLanes, type Visit } from '../../charts/lanes-layout.ts';
import { useWidth } from '../../charts/use-width.ts';
import { formatDay, formatMoment } from '../../lib/format.ts';
import { recordAnchor, recordInWords } from './record-in-words.ts';

/** Room on the right for an open end and the last label. */
const rightRoom = 28;

/** The way of a job across the areas, as lanes on one time axis. A bar leads to its record in the list. */
export function JobLanes({
  records,
  timeZone,
  until,
}: {
  records: readonly JobRecord[];
  timeZone: string;
  /** Where open visits end in the picture: up to when the data speak. */
  until: number;
}) {
  const [holder, width] = useWidth<HTMLDivElement>();
  const [under, setUnder] = useState<string | null>(null);
  const visits = records.flatMap(visitOf);
  if (visits.length === 0) return null;
  const recordOf = (id: string) => records.find((record) => recordAnchor(record) === id);
  const lanes = layoutLanes(
    visits,
    until,
    Math.max(80, width - laneNamesWidth - rightRoom),
    zoneRules(timeZone),
  );
  const shown = under === null ? undefined : recordOf(under);
  return (
    <div>
      <div ref={holder}>
        {width > 0 ? (
          <LanesChart
            lanes={lanes}
            width={width}
            formatTick={(at, withTime) => tickName(at, withTime, timeZone)}
            wrap={(visit, picture) => (
              <a
                href={`#${visit.id}`}
                onFocus={() => setUnder(visit.id)}
                onBlur={() => setUnder(null)}
                onMouseEnter={() => setUnder(visit.id)}
                onMouseLeave={() => setUnder(null)}
              >
                <g role="img" aria-label={inWords(recordOf(visit.id), visit.visit, timeZone)}>
                  {picture}
                </g>
              </a>
            )}
          />
        ) : null}
      </div>
      <p className="min-h-10 border-t border-hair pt-1 text-label">
        {shown ? (
          recordInWords(shown, timeZone)
        ) : (
          <span className="text-soft">
            Light: waiting. Dark: in process. Outlined: not known which. A number: visited again. A
            broken end: still inside. Choose a bar to see its times.
          </span>
        )}
      </p>
    </div>
  );
}

/** A day by its date, an hour within it by its time. */
function tickName(at: number, withTime: boolean, timeZone: string): string {
  const time = formatMoment(at, timeZone).split(', ')[1] ?? '';
  return withTime && time !== '00:00' ? time : formatDay(at, timeZone).replace(/ \d{4}$/, '');
}

function visitOf(record: JobRecord): Visit[] {
  const entered = record.entered ?? record.started ?? record.left;
  if (entered === null) return [];
  const at = (moment: string | null) => (moment === null ? null : Date.parse(moment));
  return [
    {
      id: recordAnchor(record),
      lane: record.areaName,
      entered: Date.parse(entered),
      started: at(record.started),
      left: at(record.left),
      pass: record.pass,
    },
  ];
}

function inWords(record: JobRecord | undefined, visit: number, timeZone: string): string {
  if (!record) return '';
  return `${visit > 1 ? `Visit ${visit}: ` : ''}${recordInWords(record, timeZone)}`;
}
