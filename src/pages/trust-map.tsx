import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { ApiError } from '../api/api-error.ts';
import { paths } from '../app/paths.ts';
import { usePeriod } from '../features/period/use-period.ts';
import { trustQuery } from '../features/trust/queries.ts';
import { trustSentence, type TrustClause } from '../features/trust/trust-in-words.ts';
import { TrustNotices } from '../features/trust/trust-notices.tsx';
import { TrustPicture } from '../features/trust/trust-picture.tsx';
import { TrustTable } from '../features/trust/trust-table.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  useTitle('Trust map');
  const site = useSiteOfPage();
  const { period, search } = usePeriod(site);
  const trust = useQuery({ ...trustQuery(site.id, period), enabled: site.dataUntil !== null });
  const linkTo = (zoneId: number) => paths.zone(site.id, zoneId) + search;
  const evidenceOf = ({ evidence }: TrustClause) =>
    typeof evidence === 'string' ? `${search}#${evidence}` : linkTo(evidence.zoneId);
  const failed = trust.error instanceof ApiError ? trust.error : null;
  const areas = trust.data?.areas ?? [];
  const graded = new Set(trust.data?.cells.map((cell) => cell.zoneId));
  const shown = areas.filter((area) => graded.has(area.id));
  return (
    <div className="flex flex-col gap-5">
      <PageHeading>Trust map</PageHeading>
      {failed ? <ProblemNotice problem={failed.problem} /> : null}
      {site.dataUntil === null ? (
        <EmptyState title="There are no data to trust yet.">
          <Link to={paths.intake(site.id) + search}>Load an export</Link>, and this screen says day
          by day and area by area what it can carry.
        </EmptyState>
      ) : trust.data ? (
        <>
          {trust.data.cells.length === 0 ? (
            <EmptyState title="No day of this period lies within the loaded span.">
              Choose another period on the ruler above.
            </EmptyState>
          ) : (
            <>
              <Sentence>
                {trustSentence(trust.data, shown).map((clause) => (
                  <Link key={clause.text} to={evidenceOf(clause)}>
                    {clause.text}
                  </Link>
                ))}
              </Sentence>
              <div id="picture">
                <TrustPicture areas={shown} cells={trust.data.cells} linkTo={linkTo} />
              </div>
            </>
          )}
          <TrustNotices notices={trust.data.notices} areas={areas} linkTo={linkTo} />
          {trust.data.cells.length === 0 ? null : (
            <details className="no-print">
              <summary className="cursor-pointer">The days behind the picture</summary>
              <TrustTable areas={shown} cells={trust.data.cells} linkTo={linkTo} />
            </details>
          )}
        </>
      ) : failed ? null : (
        <Loading what="the trust map" />
      )}
    </div>
  );
}
