import { Link, Navigate, useSearchParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { FirstAdminForm } from '../features/session/first-admin-form.tsx';
import { useSession } from '../features/session/queries.ts';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { useTitle } from './use-page.ts';

export function Component() {
  useTitle('First admin');
  const { awaitsFirstAdmin, session } = useSession();
  const [search] = useSearchParams();
  if (session) return <Navigate to={paths.sites} replace />;
  return (
    <div className="mx-auto flex max-w-md flex-col gap-6">
      <PageHeading>First admin</PageHeading>
      {awaitsFirstAdmin ? (
        <>
          <Sentence>
            Nobody is here yet. Whoever holds the token from the server’s log makes the organisation
            and becomes its admin.
          </Sentence>
          <FirstAdminForm token={search.get('token') ?? ''} />
        </>
      ) : (
        <Sentence>
          The first admin was made already. <Link to={paths.signIn}>Sign in</Link>
        </Sentence>
      )}
    </div>
  );
}
