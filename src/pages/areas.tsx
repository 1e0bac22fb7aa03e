import { useQuery } from '@tanstack/react-query';
import { ApiError } from '../api/api-error.ts';
import { paths } from '../app/paths.ts';
import { AddArea } from '../features/areas/add-area.tsx';
import { AreaTable } from '../features/areas/area-table.tsx';
import { LikelyPairs } from '../features/areas/likely-pairs.tsx';
import { MoveList } from '../features/areas/move-list.tsx';
import { areasQuery } from '../features/areas/queries.ts';
import { areasSentence, shownAreas } from '../features/areas/words.ts';
import { usePeriod } from '../features/period/use-period.ts';
import { useMay } from '../features/session/queries.ts';
import { OrderPanel } from '../features/set-up/order-panel.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  useTitle('Areas');
  const site = useSiteOfPage();
  const { search } = usePeriod(site);
  const { data, error, isPending } = useQuery(areasQuery(site.id));
  const mayMove = useMay('area.move', site.organisationId);
  const mayCreate = useMay('zone.create', site.organisationId);
  return (
    <div className="flex flex-col gap-6">
      <PageHeading>Areas</PageHeading>
      {error instanceof ApiError ? <ProblemNotice problem={error.problem} /> : null}
      {isPending ? <Loading what="the areas" /> : null}
      {data ? (
        <>
          <Sentence>{areasSentence(data, site.timeZone)}</Sentence>
          <LikelyPairs site={site} all={data} mayChange={mayMove} />
          {shownAreas(data).length === 0 ? (
            <EmptyState title="No file has named an area.">
              Areas arise from the first upload, as its file names them.
            </EmptyState>
          ) : (
            <AreaTable
              site={site}
              all={data}
              mayChange={mayMove}
              linkTo={(areaId) => paths.zone(site.id, areaId) + search}
            />
          )}
          {mayMove && shownAreas(data).length > 1 ? <OrderPanel siteId={site.id} /> : null}
          {mayCreate ? <AddArea siteId={site.id} /> : null}
          {data.areas.length > 0 ? (
            <MoveList site={site} moves={data.moves} mayChange={mayMove} />
          ) : null}
        </>
      ) : null}
    </div>
  );
}
