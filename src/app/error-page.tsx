import { useQueryErrorResetBoundary } from '@tanstack/react-query';
import { Link, useRouteError } from 'react-router-dom';
import { ApiError } from '../api/api-error.ts';
import { Button } from '../ui/button.tsx';
import { PageHeading } from '../ui/heading.tsx';
import { Notice, ProblemNotice } from '../ui/notice.tsx';
import { paths } from './paths.ts';

/** What is shown where a screen cannot be: the problem in words, and the ways on. */
export function ErrorPage() {
  const error = useRouteError();
  const { reset } = useQueryErrorResetBoundary();
  return (
    <div className="flex max-w-2xl flex-col gap-4 p-6">
      <PageHeading>This screen cannot be shown</PageHeading>
      {error instanceof ApiError ? (
        <ProblemNotice problem={error.problem} />
      ) : (
        <Notice kind="error">
          Something went wrong in this browser. Nothing that was saved is lost. Load the screen
          again.
        </Notice>
      )}
      <div className="flex gap-4">
        <Button
          onPress={() => {
            reset();
            window.location.reload();
          }}
        >
          Load it again
        </Button>
        <Link to={paths.sites}>Go to the sites</Link>
      </div>
    </div>
  );
}

export function NotFoundPage() {
  return (
    <div className="flex max-w-2xl flex-col gap-4">
      <PageHeading>There is nothing at this address</PageHeading>
      <p>
        The link may be old, or mistyped. <Link to={paths.sites}>Go to the sites</Link>
      </p>
    </div>
  );
}
