import type { ReactNode } from 'react';

const kinds = {
  info: { sign: 'Note', look: 'border-water' },
  warning: { sign: 'Mind', look: 'border-drift' },
  error: { sign: 'Wrong', look: 'border-over' },
};

/** A sentence that needs to be read; its kind is told by a word as well as by the mark at its side. */
export function Notice({
  kind = 'info',
  children,
}: {
  kind?: keyof typeof kinds;
  children: ReactNode;
}) {
  const { sign, look } = kinds[kind];
  return (
    <div
      role={kind === 'error' ? 'alert' : 'status'}
      className={`border-l-4 bg-panel py-2 pr-3 pl-3 ${look}`}
    >
      <span className="mr-2 font-bold">{sign}:</span>
      {children}
    </div>
  );
}

/** A problem in words: what was wrong, field by field. */
export function ProblemNotice({
  problem,
}: {
  problem: {
    title: string;
    detail: string;
    errors?: { field: string; message: string }[] | undefined;
  };
}) {
  return (
    <Notice kind="error">
      <strong>{problem.title}.</strong> {problem.detail}
      {problem.errors?.length ? (
        <ul className="mt-1 list-inside list-disc">
          {problem.errors.map((error) => (
            <li key={`${error.field} ${error.message}`}>
              {error.field}: {error.message}
            </li>
          ))}
        </ul>
      ) : null}
    </Notice>
  );
}
