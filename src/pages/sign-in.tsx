import { Navigate, useSearchParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { useSession } from '../features/session/queries.ts';
import { SignInForm } from '../features/session/sign-in-form.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { useTitle } from './use-page.ts';

export function Component() {
  useTitle('Sign in');
  const { session, awaitsFirstAdmin } = useSession();
  const [search] = useSearchParams();
  const asked = search.get('to') ?? paths.sites;
  // Only an address of our own: never one of another site.
  const to = asked.startsWith('/') && !asked.startsWith('//') ? asked : paths.sites;
  if (awaitsFirstAdmin) return <Navigate to={paths.firstAdmin} replace />;
  if (session) return <Navigate to={to} replace />;
  return (
    <div className="mx-auto flex max-w-md flex-col gap-6">
      <PageHeading>Sign in</PageHeading>
      <Sentence>
        See how much work sits where, how fast it moves, and whether the figures can be trusted.
      </Sentence>
      <SignInForm />
    </div>
  );
}
