import { useQuery, useSuspenseQuery } from '@tanstack/react-query';
import { useParams, useSearchParams } from 'react-router-dom';
import type { Step, Summary } from '../../shared/contracts/figures.ts';
import type { Site } from '../../shared/contracts/sites.ts';
import { dayMs } from '../../shared/local-time.ts';
import { ApiError } from '../api/api-error.ts';
import { paths } from '../app/paths.ts';
import { StackedCharts } from '../charts/stacked-charts.tsx';
import { usePeriod, type Period } from '../features/period/use-period.ts';
import { TrustNote } from '../features/trust/trust-note.tsx';
import { BooksPanel } from '../features/zones/books-panel.tsx';
import { CapCaution } from '../features/zones/cap-caution.tsx';
import { DepartedList } from '../features/zones/departed-list.tsx';
import { InsideList } from '../features/zones/inside-list.tsx';
import { LittlesPanel } from '../features/zones/littles-panel.tsx';
import { fewDepartures, PeriodPanel } from '../features/zones/period-panel.tsx';
import { seriesQuery, summaryQuery, zoneQuery } from '../features/zones/queries.ts';
import { SeriesTable } from '../features/zones/series-table.tsx';
import { zoneSentence } from '../features/zones/zone-sentence.ts';
import { Breadcrumbs } from '../ui/breadcrumbs.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

const steps: readonly { value: Step; label: string }[] = [
  { value: 'hour', label: 'by hour' },
  { value: 'day', label: 'by day' },
  { value: 'week', label: 'by week' },
];

export function Component() {
  const site = useSiteOfPage();
  const zoneId = Number(useParams().zoneId);
  const zone = useSuspenseQuery(zoneQuery(site.id, zoneId)).data;
  const name = zone.kind === 'site' ? 'Whole site' : zone.name;
  useTitle(name);
  const { period, unit, search } = usePeriod(site);
  const [step, setStep] = useStep(period);
  const asked = { ...period, unit };
  const series = useQuery(seriesQuery(site.id, zoneId, asked, step));
  const summary = useQuery(summaryQuery(site.id, zoneId, asked));
  const [at, setAt] = useMoment(summary.data, site);
  const failed = [series.error, summary.error].find((error) => error instanceof ApiError);
  return (
    <div className="flex flex-col gap-5">
      <Breadcrumbs links={[{ to: paths.floor(site.id) + search, label: 'Floor' }]} here={name} />
      <PageHeading>{name}</PageHeading>
      {failed ? <ProblemNotice problem={failed.problem} /> : null}
      {summary.data ? (
        <div className="flex flex-col gap-1">
          <Sentence>{zoneSentence(zone, summary.data, site.timeZone)}</Sentence>
          <TrustNote
            siteId={site.id}
            period={period}
            areaIds={zone.areaIds}
            to={paths.trust(site.id) + search}
          />
        </div>
      ) : (
        <Loading what="the figures" />
      )}
      <div className="grid gap-8 xl:grid-cols-[minmax(0,1fr)_20rem] print:grid-cols-[minmax(0,1fr)_20rem]">
        <div className="flex min-w-0 flex-col gap-5">
          <div className="no-print w-40">
            <Select
              label="Steps"
              value={step}
              choices={steps}
              onChange={(value) => setStep(value as Step)}
            />
          </div>
          {series.data ? (
            <>
              <StackedCharts
                points={series.data.points}
                timeZone={site.timeZone}
                unit={unit}
                step={step}
                cap={zone.cap?.unit === unit ? zone.cap.limit : null}
                onPick={setAt}
              />
              <details className="no-print">
                <summary className="cursor-pointer">The figures behind the charts</summary>
                <SeriesTable points={series.data.points} timeZone={site.timeZone} />
              </details>
            </>
          ) : (
            <Loading what="the charts" />
          )}
          {zone.cap ? <CapCaution /> : null}
          {at ? (
            <div className="no-print">
              <InsideList
                siteId={site.id}
                zoneId={zoneId}
                at={at}
                timeZone={site.timeZone}
                jobLink={(jobKey) => paths.job(site.id, jobKey) + search}
                rowLink={(uploadId, line) => paths.row(site.id, uploadId, line) + search}
              />
            </div>
          ) : null}
        </div>
        {summary.data ? (
          <aside className="flex flex-col gap-6" aria-label="Figures of the period">
            <LittlesPanel summary={summary.data} timeZone={site.timeZone} />
            <BooksPanel summary={summary.data} />
            <PeriodPanel summary={summary.data} />
            {isFew(summary.data) ? (
              <DepartedList
                siteId={site.id}
                zoneId={zoneId}
                asked={asked}
                jobLink={(jobKey) => paths.job(site.id, jobKey) + search}
              />
            ) : null}
          </aside>
        ) : null}
      </div>
    </div>
  );
}

const isFew = ({ departures }: Summary) =>
  departures !== null && departures > 0 && departures < fewDepartures;

/** The step in the address; by the length of the period where it names none. */
function useStep(period: Period): [Step, (step: Step) => void] {
  const [search, setSearch] = useSearchParams();
  const days = (Date.parse(period.to) - Date.parse(period.from)) / dayMs;
  const usual: Step = days <= 3 ? 'hour' : days <= 400 ? 'day' : 'week';
  const named = steps.find((each) => each.value === search.get('step'))?.value;
  const setStep = (step: Step) =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      next.set('step', step);
      return next;
    });
  return [named ?? usual, setStep];
}

/** The moment whose stays are listed: in the address, else the end of what is known of the period. */
function useMoment(summary: Summary | undefined, site: Site): [string | null, (at: Date) => void] {
  const [search, setSearch] = useSearchParams();
  const setAt = (at: Date) =>
    setSearch((before) => {
      const next = new URLSearchParams(before);
      next.set('at', at.toISOString());
      return next;
    });
  const named = search.get('at');
  if (named !== null && !Number.isNaN(Date.parse(named))) return [named, setAt];
  if (!summary || site.dataUntil === null) return [null, setAt];
  const end = Math.min(Date.parse(summary.to), Date.parse(summary.dataUntil ?? site.dataUntil));
  return [new Date(end - 1).toISOString(), setAt];
}
