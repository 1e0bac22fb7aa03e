import { QueryClientProvider } from '@tanstack/react-query';
import { StrictMode } from 'react';
import { createRoot } from 'react-dom/client';
import { RouterProvider } from 'react-router-dom';
import { createQueryClient } from './api/query-client.ts';
import { onSignedOut } from './api/signed-out.ts';
import { paths } from './app/paths.ts';
import { createRouter } from './app/router.tsx';
import './styles.css';

const client = createQueryClient();
const router = createRouter(client);

// A session that ended elsewhere: sign in, and come back.
onSignedOut(() => {
  const { pathname, search } = router.state.location;
  if (pathname === paths.signIn) return;
  void client.resetQueries({ queryKey: ['session'] }).then(() => {
    const to = new URLSearchParams({ to: pathname + search }).toString();
    return router.navigate(`${paths.signIn}?${to}`);
  });
});

const root = document.getElementById('root');
if (!root) throw new Error('The page has no root.');
createRoot(root).render(
  <StrictMode>
    <QueryClientProvider client={client}>
      <RouterProvider router={router} />
    </QueryClientProvider>
  </StrictMode>,
);
