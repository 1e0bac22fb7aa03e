import { useSuspenseQuery } from '@tanstack/react-query';
import { Link, useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { JobLanes } from '../features/jobs/job-lanes.tsx';
import { JobRecords } from '../features/jobs/job-records.tsx';
import { VoidedRows } from '../features/jobs/voided-rows.tsx';
import { jobSentence } from '../features/jobs/job-sentence.ts';
import { jobQuery } from '../features/jobs/queries.ts';
import { usePeriod } from '../features/period/use-period.ts';
import { formatDuration, formatMoment } from '../lib/format.ts';
import { Breadcrumbs } from '../ui/breadcrumbs.tsx';
import { PageHeading, PanelHeading, Sentence } from '../ui/heading.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  const site = useSiteOfPage();
  const { jobKey = '' } = useParams();
  useTitle(jobKey);
  const { search } = usePeriod(site);
  const job = useSuspenseQuery(jobQuery(site.id, jobKey)).data;
  return (
    <div className="flex flex-col gap-5">
      <Breadcrumbs links={[{ to: paths.floor(site.id) + search, label: 'Floor' }]} here={jobKey} />
      <PageHeading>{jobKey}</PageHeading>
      <Sentence>{jobSentence(job.records, site.timeZone)}</Sentence>
      <section className="flex flex-col gap-3">
        <PanelHeading>Its way</PanelHeading>
        <JobLanes
          records={job.records}
          timeZone={site.timeZone}
          until={Date.parse(site.dataUntil ?? '')}
        />
      </section>
      <section>
        <PanelHeading>Its records, in order</PanelHeading>
        <JobRecords
          records={job.records}
          timeZone={site.timeZone}
          rowLink={(uploadId, line) => paths.row(site.id, uploadId, line) + search}
        />
      </section>
      <VoidedRows
        rows={job.voided}
        timeZone={site.timeZone}
        rowLink={(uploadId, line) => paths.row(site.id, uploadId, line) + search}
      />
      <section>
        <PanelHeading>Its stays in zones of several areas</PanelHeading>
        <ul>
          {job.stays
            .filter((stay) => stay.kind !== 'area')
            .map((stay) => (
              <li key={`${stay.zoneId} ${stay.entered}`} className="border-b border-hair py-2">
                <Link to={paths.zone(site.id, stay.zoneId) + search}>
                  {stay.kind === 'site' ? 'Whole site' : stay.zoneName}
                </Link>
                : from {formatMoment(stay.entered, site.timeZone)}
                {stay.left === null
                  ? ', still inside'
                  : ` to ${formatMoment(stay.left, site.timeZone)}, ${formatDuration(stay.flowSeconds)}`}
              </li>
            ))}
        </ul>
      </section>
    </div>
  );
}
