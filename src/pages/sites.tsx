import { useSuspenseQuery } from '@tanstack/react-query';
import { Link, useNavigate } from 'react-router-dom';
import { roleMay } from '../../shared/permissions.ts';
import { paths } from '../app/paths.ts';
import { useSession } from '../features/session/queries.ts';
import { NewSiteForm } from '../features/sites/new-site-form.tsx';
import { sitesQuery } from '../features/sites/queries.ts';
import { formatMoment, plural } from '../lib/format.ts';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, PanelHeading, Sentence } from '../ui/heading.tsx';
import { useTitle } from './use-page.ts';

export function Component() {
  useTitle('Sites');
  const { session } = useSession();
  const sites = useSuspenseQuery(sitesQuery).data;
  const navigate = useNavigate();
  const organisations = session?.organisations ?? [];
  const mayCreate = organisations.filter((each) => roleMay(each.role, 'site.create'));
  return (
    <div className="mx-auto flex max-w-3xl flex-col gap-8">
      <div className="flex flex-col gap-2">
        <PageHeading>Sites</PageHeading>
        <Sentence>
          You see {plural(sites.length, 'site')} of {plural(organisations.length, 'organisation')}.
        </Sentence>
      </div>
      {sites.length === 0 ? (
        <EmptyState title="There is no site yet.">
          A site is a plant, a laboratory or a depot whose work is measured.
        </EmptyState>
      ) : (
        <ul className="flex flex-col">
          {sites.map((site) => (
            <li
              key={site.id}
              className="flex flex-wrap justify-between gap-4 border-b border-hair py-3"
            >
              <span>
                <Link to={paths.floor(site.id)} className="font-bold">
                  {site.name}
                </Link>{' '}
                <span className="text-soft">{site.organisationName}</span>
              </span>
              <span className="text-soft">
                {site.timeZone} ·{' '}
                {site.dataUntil
                  ? `data until ${formatMoment(site.dataUntil, site.timeZone)}`
                  : 'no data yet'}
              </span>
            </li>
          ))}
        </ul>
      )}
      {mayCreate.length > 0 ? (
        <section className="flex flex-col gap-4">
          <PanelHeading>Another site</PanelHeading>
          <NewSiteForm
            organisations={mayCreate}
            onMade={(siteId) => void navigate(paths.intake(siteId))}
          />
        </section>
      ) : null}
    </div>
  );
}
