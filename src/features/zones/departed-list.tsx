import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { ApiError } from '../../api/api-error.ts';
import { formatDuration } from '../../lib/format.ts';
import { PanelHeading } from '../../ui/heading.tsx';
import { Loading } from '../../ui/loading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { departuresQuery, type Asked } from './queries.ts';

/** The jobs that left, where there are too few of them for percentiles. */
export function DepartedList({
  siteId,
  zoneId,
  asked,
  jobLink,
}: {
  siteId: number;
  zoneId: number;
  asked: Asked;
  jobLink: (jobKey: string) => string;
}) {
  const departed = useQuery(departuresQuery(siteId, zoneId, asked));
  return (
    <section className="flex flex-col gap-1">
      <PanelHeading>Left in this period</PanelHeading>
      {departed.error instanceof ApiError ? (
        <ProblemNotice problem={departed.error.problem} />
      ) : null}
      {departed.data ? (
        <ul>
          {departed.data.stays.map((stay) => (
            <li key={`${stay.jobKey} ${stay.left}`} className="flex justify-between gap-3 py-0.5">
              <Link to={jobLink(stay.jobKey)}>{stay.jobKey}</Link>
              <span>
                {formatDuration(stay.flowSeconds)}
                {stay.finishInferred ? ' (finish inferred)' : ''}
              </span>
            </li>
          ))}
        </ul>
      ) : departed.isPending ? (
        <Loading what="the jobs that left" />
      ) : null}
    </section>
  );
}
