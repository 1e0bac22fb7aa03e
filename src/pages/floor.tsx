import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { FloorRow } from '../../shared/contracts/figures.ts';
import { dayMs } from '../../shared/local-time.ts';
import { ApiError } from '../api/api-error.ts';
import { paths } from '../app/paths.ts';
import { FirstSteps } from '../features/first-steps/first-steps.tsx';
import { FloorSection } from '../features/floor/floor-section.tsx';
import { FloorTable } from '../features/floor/floor-table.tsx';
import { floorLevelsQuery, floorQuery } from '../features/floor/queries.ts';
import { floorSentence, type Clause } from '../features/floor/sentence.ts';
import { usePeriod } from '../features/period/use-period.ts';
import { useMay } from '../features/session/queries.ts';
import { SetUpPanel } from '../features/set-up/set-up-panel.tsx';
import { gradesInShort } from '../features/trust/poor-days.ts';
import { trustQuery } from '../features/trust/queries.ts';
import { TrustNote } from '../features/trust/trust-note.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  useTitle('Floor');
  const site = useSiteOfPage();
  const { period, unit, search } = usePeriod(site);
  const floor = useQuery({
    ...floorQuery(site.id, { ...period, unit }),
    enabled: site.dataUntil !== null,
  });
  const levels = useQuery({
    ...floorLevelsQuery(site.id, { ...period, unit }),
    enabled: site.dataUntil !== null,
  });
  const trust = useQuery({
    ...trustQuery(site.id, period),
    enabled: site.dataUntil !== null,
  }).data;
  const trustOf = (areaIds: readonly number[]) =>
    gradesInShort(trust?.cells.filter((cell) => areaIds.includes(cell.zoneId)) ?? []);
  const mayUpload = useMay('upload.create', site.organisationId);
  const mayChange = useMay('zone.change', site.organisationId);
  const linkTo = (zoneId: number) => paths.zone(site.id, zoneId) + search;
  const evidenceOf = ({ evidence }: Clause) => {
    if (evidence === 'uploads') return paths.intake(site.id) + search;
    return evidence === 'areas' ? `${search}#areas` : linkTo(evidence.zoneId);
  };
  if (site.dataUntil === null)
    return (
      <>
        <PageHeading>Floor</PageHeading>
        <FirstSteps
          intakePath={paths.intake(site.id) + search}
          mayUpload={mayUpload}
          isBusy={site.busy}
        />
      </>
    );
  return (
    <div className="flex flex-col gap-5">
      <PageHeading>Floor</PageHeading>
      {floor.error instanceof ApiError ? <ProblemNotice problem={floor.error.problem} /> : null}
      {floor.data ? (
        <>
          <div className="flex flex-col gap-1">
            <Sentence>
              {floorSentence(floor.data.rows, floor.data.unit, floor.data.to).map((clause) => (
                <Link key={clause.text} to={evidenceOf(clause)}>
                  {clause.text}
                </Link>
              ))}
            </Sentence>
            <TrustNote
              siteId={site.id}
              period={period}
              areaIds={areaIdsOf(floor.data.rows)}
              to={paths.trust(site.id) + search}
            />
          </div>
          {mayChange ? <SetUpPanel siteId={site.id} /> : null}
          <FloorSection
            rows={floor.data.rows}
            levels={levels.data}
            days={daysOf(floor.data)}
            unit={floor.data.unit}
            linkTo={linkTo}
          />
          <div id="areas">
            <FloorTable
              rows={floor.data.rows}
              days={daysOf(floor.data)}
              linkTo={linkTo}
              trustOf={trustOf}
            />
          </div>
          {floor.data.approximate ? (
            <p className="text-soft">Percentiles are read from bins and right within 1 %.</p>
          ) : null}
        </>
      ) : floor.isPending ? (
        <Loading what="the areas" />
      ) : null}
    </div>
  );
}

const areaIdsOf = (rows: readonly FloorRow[]): number[] =>
  rows.filter((row) => row.zone.kind === 'area').map((row) => row.zone.id);

const daysOf = (period: { from: string; to: string }): number =>
  (Date.parse(period.to) - Date.parse(period.from)) / dayMs;
