import { useInfiniteQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { InsideStay } from '../../../shared/contracts/figures.ts';
import { ApiError } from '../../api/api-error.ts';
import { formatCount, formatDuration, formatMoment } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { DataTable, type Column } from '../../ui/data-table.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { Loading } from '../../ui/loading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { insideQuery } from './queries.ts';

/** Who was inside a zone at a moment, longest first, each with its job and the row of its file. */
export function InsideList({
  siteId,
  zoneId,
  at,
  timeZone,
  jobLink,
  rowLink,
}: {
  siteId: number;
  zoneId: number;
  at: string;
  timeZone: string;
  jobLink: (jobKey: string) => string;
  rowLink: (uploadId: number, line: number) => string;
}) {
  const inside = useInfiniteQuery(insideQuery(siteId, zoneId, at));
  const stays = inside.data?.pages.flatMap((page) => page.stays) ?? [];
  const total = inside.data?.pages[0]?.total;
  const columns: Column<InsideStay>[] = [
    {
      id: 'job',
      header: 'job',
      value: (stay) => stay.jobKey,
      cell: (stay) => <Link to={jobLink(stay.jobKey)}>{stay.jobKey}</Link>,
    },
    {
      id: 'age',
      header: 'inside for',
      figure: true,
      value: (stay) => stay.ageSeconds,
      cell: (stay) => formatDuration(stay.ageSeconds),
    },
    moment('entered', 'entered', (stay) => stay.entered, timeZone),
    moment('started', 'started', (stay) => stay.started, timeZone),
    {
      ...moment('left', 'left', (stay) => stay.left, timeZone),
      cell: (stay) =>
        stay.left === null
          ? 'still inside'
          : formatMoment(stay.left, timeZone) + (stay.finishInferred ? ' (inferred)' : ''),
    },
    {
      id: 'row',
      header: 'row of the file',
      value: (stay) => `${stay.record.uploadId}:${stay.record.line}`,
      cell: (stay) => (
        <Link to={rowLink(stay.record.uploadId, stay.record.line)}>
          upload {stay.record.uploadId}, line {stay.record.line}
        </Link>
      ),
    },
  ];
  return (
    <section className="flex flex-col gap-2" aria-live="polite">
      <PanelHeading>
        Inside on {formatMoment(at, timeZone)}
        {total === undefined ? '' : `: ${formatCount(total)}, longest first`}
      </PanelHeading>
      {inside.error instanceof ApiError ? <ProblemNotice problem={inside.error.problem} /> : null}
      {inside.data ? (
        stays.length > 0 ? (
          <>
            <DataTable
              label="Inside then, longest first"
              columns={columns}
              rows={stays}
              fileName="inside.csv"
              filterLabel="Rows with"
            />
            {inside.hasNextPage ? (
              <div className="no-print flex items-center gap-3 text-soft">
                The {formatCount(stays.length)} longest are listed.
                <Button
                  isDisabled={inside.isFetchingNextPage}
                  onPress={() => void inside.fetchNextPage()}
                >
                  List more
                </Button>
              </div>
            ) : null}
          </>
        ) : (
          <p className="text-soft">Nobody was inside then.</p>
        )
      ) : inside.isPending ? (
        <Loading what="who was inside" />
      ) : null}
    </section>
  );
}

const moment = (
  id: string,
  header: string,
  value: (stay: InsideStay) => string | null,
  timeZone: string,
): Column<InsideStay> => ({
  id,
  header,
  value,
  cell: (stay) => formatMoment(value(stay), timeZone),
});
