import { useQuery, useQueryClient } from '@tanstack/react-query';
import { useEffect } from 'react';
import { ApiError } from '../api/api-error.ts';
import { useMay } from '../features/session/queries.ts';
import { ColumnPlans } from '../features/uploads/column-plans.tsx';
import { NewUpload } from '../features/uploads/new-upload.tsx';
import { isUnderWay, uploadsQuery } from '../features/uploads/queries.ts';
import { UploadItem } from '../features/uploads/upload-item.tsx';
import { plural } from '../lib/format.ts';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, PanelHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  useTitle('Intake');
  const site = useSiteOfPage();
  const mayUpload = useMay('upload.create', site.organisationId);
  const uploads = useQuery(uploadsQuery(site.id));
  useFreshSite(site.id, uploads.data?.some(isUnderWay) ?? false);
  const underWay = uploads.data?.filter(isUnderWay).length ?? 0;
  const loaded = uploads.data?.filter((upload) => upload.status === 'loaded').length ?? 0;
  return (
    <div className="flex flex-col gap-6">
      <PageHeading>Intake</PageHeading>
      <Sentence>
        {underWay > 0 ? `${plural(underWay, 'upload')} under way. ` : ''}
        {plural(loaded, 'upload')} loaded. Every row of each is accounted for.
      </Sentence>
      {mayUpload ? <NewUpload site={site} /> : null}
      <ColumnPlans site={site} mayChange={mayUpload} />
      <section>
        <PanelHeading>Uploads, newest first</PanelHeading>
        {uploads.error instanceof ApiError ? (
          <ProblemNotice problem={uploads.error.problem} />
        ) : null}
        {uploads.isPending ? <Loading what="the uploads" /> : null}
        {uploads.data?.length === 0 ? (
          <EmptyState title="Nothing was uploaded yet.">
            {mayUpload
              ? 'Drop an export above; what it holds is shown before it is read.'
              : 'An analyst of this site uploads its exports.'}
          </EmptyState>
        ) : null}
        <ul>
          {uploads.data?.map((upload) => (
            <UploadItem key={upload.id} upload={upload} site={site} mayChange={mayUpload} />
          ))}
        </ul>
      </section>
    </div>
  );
}

/** Once the last upload under way has ended, everything that is shown of the site is asked for again. */
function useFreshSite(siteId: number, working: boolean): void {
  const client = useQueryClient();
  useEffect(() => {
    void client.invalidateQueries({ queryKey: ['site', siteId] });
  }, [client, siteId, working]);
}
