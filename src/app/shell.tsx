import { useQuery, useQueryClient } from '@tanstack/react-query';
import { Suspense, useEffect, type ReactNode } from 'react';
import { Link, NavLink, Outlet, useParams } from 'react-router-dom';
import { plantedQuery } from '../features/demo/queries.ts';
import { TimeRuler } from '../features/period/time-ruler.tsx';
import { UnitSwitch } from '../features/period/unit-switch.tsx';
import { usePeriod } from '../features/period/use-period.ts';
import { useMay, useRole, useSession } from '../features/session/queries.ts';
import { useSite } from '../features/sites/queries.ts';
import type { Site } from '../../shared/contracts/sites.ts';
import { formatMoment } from '../lib/format.ts';
import { Loading } from '../ui/loading.tsx';
import { Notice } from '../ui/notice.tsx';
import { AccountMenu } from './account-menu.tsx';
import { JobSearch } from './job-search.tsx';
import { Mark } from './mark.tsx';
import { paths } from './paths.ts';
import { useOnline } from './use-online.ts';

/** The frame of every screen of a site: header, period, navigation. */
export function SiteShell() {
  const siteId = Number(useParams().siteId);
  const site = useSite(siteId);
  const { search } = usePeriod(site);
  const role = useRole(site.organisationId);
  useFreshFigures(site);
  return (
    <div className="flex min-h-dvh flex-col print:min-h-0">
      <SkipLink />
      <Header role={role}>
        <span>
          <strong>{site.organisationName}</strong>{' '}
          <span className="text-soft">
            {site.name} · {site.timeZone} ·{' '}
            {site.dataUntil === null
              ? 'no data yet'
              : `data until ${formatMoment(site.dataUntil, site.timeZone)}`}
          </span>
        </span>
        <UnitSwitch site={site} />
        <JobSearch siteId={siteId} search={search} />
      </Header>
      <TimeRuler site={site} />
      <div className="flex flex-1 flex-col lg:flex-row">
        <Navigation site={site} search={search} />
        <main id="main" className="min-w-0 flex-1 bg-panel px-4 py-5 md:px-7">
          <OfflineNotice />
          {site.busy ? (
            <div className="mb-4">
              <Notice>The site is being worked on; figures catch up when that is done.</Notice>
            </div>
          ) : null}
          <Suspense fallback={<Loading what="the screen" />}>
            <Outlet context={site} />
          </Suspense>
        </main>
      </div>
    </div>
  );
}

/** What is shown of a site is asked for again once its figures have caught up. */
function useFreshFigures({ id, busy }: Site): void {
  const client = useQueryClient();
  useEffect(() => {
    if (!busy) void client.invalidateQueries({ queryKey: ['site', id] });
  }, [client, id, busy]);
}

/** The frame of the screens that belong to no site. */
export function PlainShell() {
  return (
    <div className="min-h-dvh">
      <SkipLink />
      <Header role={null} />
      <main id="main" className="px-4 py-8 md:px-7">
        <OfflineNotice />
        <Suspense fallback={<Loading what="the screen" />}>
          <Outlet />
        </Suspense>
      </main>
    </div>
  );
}

const SkipLink = () => (
  <a href="#main" className="absolute -top-20 left-2 z-30 bg-ink px-3 py-2 text-panel focus:top-2">
    Skip to the content
  </a>
);

function Header({ role, children }: { role: string | null; children?: ReactNode }) {
  const { session } = useSession();
  return (
    <header className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 border-b border-hair px-4 py-3">
      <Link to={paths.sites} className="flex items-center gap-3 font-medium no-underline">
        <Mark />
        weirmark
      </Link>
      {children}
      {session ? <AccountMenu role={role} /> : null}
    </header>
  );
}

function OfflineNotice() {
  if (useOnline()) return null;
  return (
    <div className="mb-4">
      <Notice kind="warning">
        You are offline. What you see is what came last; nothing can be changed until the connection
        is back.
      </Notice>
    </div>
  );
}

function Navigation({ site, search }: { site: Site; search: string }) {
  const planted = useQuery(plantedQuery(site.id)).data?.planted;
  const mayKeys = useMay('access-key.read', site.organisationId);
  const links = [
    { to: paths.floor(site.id), label: 'Floor' },
    { to: paths.trust(site.id), label: 'Trust map' },
    { to: paths.intake(site.id), label: 'Intake' },
    { to: paths.areas(site.id), label: 'Areas' },
    ...(planted ? [{ to: paths.planted(site.id), label: 'What is planted' }] : []),
    ...(mayKeys ? [{ to: paths.accessKeys(site.id), label: 'Access keys' }] : []),
  ];
  return (
    <nav
      aria-label="Screens"
      className="no-print flex gap-1 border-b border-hair px-2 py-2 lg:w-52 lg:flex-col lg:border-r lg:border-b-0 lg:px-0 lg:py-5"
    >
      {links.map(({ to, label }) => (
        <NavLink
          key={to}
          to={to + search}
          className={({ isActive }) =>
            `px-4 py-1.5 no-underline hover:bg-mist ${isActive ? 'border-ink font-bold max-lg:border-b-3 lg:border-r-3' : 'text-soft'}`
          }
        >
          {label}
        </NavLink>
      ))}
    </nav>
  );
}
