import type { ReactNode } from 'react';

export function PageHeading({ children }: { children: ReactNode }) {
  return <h1 className="font-serif text-title font-semibold">{children}</h1>;
}

/** What the figures say, in words. */
export function Sentence({ children }: { children: ReactNode }) {
  return <p className="max-w-4xl font-serif text-sentence">{children}</p>;
}

export function PanelHeading({ children }: { children: ReactNode }) {
  return <h2 className="border-b border-ink pb-1 text-body font-bold">{children}</h2>;
}
