import type { ReactNode } from 'react';

/** Says that there is nothing yet, and what to do about it. */
export function EmptyState({ title, children }: { title: string; children: ReactNode }) {
  return (
    <div className="border-l-4 border-hair py-3 pl-4">
      <p className="font-serif text-sentence">{title}</p>
      <div className="mt-2 max-w-prose text-soft">{children}</div>
    </div>
  );
}
