import type { QueryClient } from '@tanstack/react-query';
import { createBrowserRouter, redirect, type LoaderFunctionArgs } from 'react-router-dom';
import { sessionQuery } from '../features/session/queries.ts';
import { ErrorPage, NotFoundPage } from './error-page.tsx';
import { paths } from './paths.ts';
import { PlainShell, SiteShell } from './shell.tsx';

/** Whoever is signed out goes to sign in, and comes back to where they were going. */
const signedInOnly =
  (client: QueryClient) =>
  async ({ request }: LoaderFunctionArgs) => {
    const { session, awaitsFirstAdmin } = await client.ensureQueryData(sessionQuery);
    if (awaitsFirstAdmin) throw redirect(paths.firstAdmin);
    if (session) return null;
    const { pathname, search } = new URL(request.url);
    throw redirect(`${paths.signIn}?${new URLSearchParams({ to: pathname + search }).toString()}`);
  };

export function createRouter(client: QueryClient) {
  const guard = signedInOnly(client);
  return createBrowserRouter([
    {
      element: <PlainShell />,
      errorElement: <ErrorPage />,
      loader: async () => {
        await client.ensureQueryData(sessionQuery);
        return null;
      },
      HydrateFallback: () => null,
      children: [
        { index: true, element: null, loader: () => redirect(paths.sites) },
        { path: paths.signIn, lazy: () => import('../pages/sign-in.tsx') },
        { path: paths.firstAdmin, lazy: () => import('../pages/first-admin.tsx') },
        { path: paths.sites, loader: guard, lazy: () => import('../pages/sites.tsx') },
        { path: '*', element: <NotFoundPage /> },
      ],
    },
    {
      path: '/sites/:siteId',
      element: <SiteShell />,
      errorElement: <ErrorPage />,
      loader: guard,
      HydrateFallback: () => null,
      children: [
        {
          errorElement: <ErrorPage />,
          children: [
            {
              index: true,
              element: null,
              loader: ({ params }) => redirect(paths.floor(Number(params.siteId))),
            },
            { path: 'floor', lazy: () => import('../pages/floor.tsx') },
            { path: 'trust', lazy: () => import('../pages/trust-map.tsx') },
            { path: 'intake', lazy: () => import('../pages/intake.tsx') },
            { path: 'zones/:zoneId', lazy: () => import('../pages/zone.tsx') },
            { path: 'jobs/:jobKey', lazy: () => import('../pages/job.tsx') },
            { path: 'uploads/:uploadId/rows/:line', lazy: () => import('../pages/row.tsx') },
            { path: 'planted', lazy: () => import('../pages/planted.tsx') },
            { path: 'areas', lazy: () => import('../pages/areas.tsx') },
            { path: 'access-keys', lazy: () => import('../pages/access-keys.tsx') },
            { path: '*', element: <NotFoundPage /> },
          ],
        },
      ],
    },
  ]);
}
