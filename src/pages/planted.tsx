import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import type { Planted } from '../../shared/contracts/demo.ts';
import { ApiError } from '../api/api-error.ts';
import { paths } from '../app/paths.ts';
import { plantedWords } from '../features/demo/planted-words.ts';
import { plantedQuery } from '../features/demo/queries.ts';
import { formatPeriod } from '../lib/format.ts';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, PanelHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { ProblemNotice } from '../ui/notice.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  useTitle('What is planted here');
  const site = useSiteOfPage();
  const answer = useQuery(plantedQuery(site.id));
  const searchOf = ({ from, to }: Planted) => `?${new URLSearchParams({ from, to }).toString()}`;
  return (
    <div className="flex max-w-4xl flex-col gap-6">
      <PageHeading>What is planted here</PageHeading>
      {answer.error instanceof ApiError ? <ProblemNotice problem={answer.error.problem} /> : null}
      {answer.isPending ? <Loading what="what is planted" /> : null}
      {answer.data?.planted === null ? (
        <EmptyState title="Nothing is planted here.">These are a site’s own data.</EmptyState>
      ) : null}
      {answer.data?.planted ? (
        <>
          <Sentence>
            This plant is invented and its 26 weeks are simulated. A good reader finds{' '}
            {answer.data.planted.length} things in them; everything else is steady.
          </Sentence>
          {answer.data.planted.map((planted) => {
            const { title, text } = plantedWords(planted, site.timeZone);
            return (
              <section key={planted.kind} className="flex flex-col gap-2">
                <PanelHeading>{title}</PanelHeading>
                <p className="font-serif text-lead">{text}</p>
                <ul className="flex flex-wrap gap-x-6 gap-y-1">
                  {planted.zones.map((zone) => (
                    <li key={zone.id}>
                      <Link to={paths.zone(site.id, zone.id) + searchOf(planted)}>
                        {zone.name}, {formatPeriod(planted.from, planted.to, site.timeZone)}
                      </Link>
                    </li>
                  ))}
                  <li>
                    <Link to={paths.floor(site.id) + searchOf(planted)}>
                      the Floor in that period
                    </Link>
                  </li>
                </ul>
              </section>
            );
          })}
        </>
      ) : null}
    </div>
  );
}
