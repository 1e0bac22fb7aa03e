import { useEffect } from 'react';
import { useOutletContext } from 'react-router-dom';
import type { Site } from '../../shared/contracts/sites.ts';

/** The site whose frame a page stands in. */
export const useSiteOfPage = () => useOutletContext<Site>();

export function useTitle(title: string): void {
  useEffect(() => {
    document.title = `${title} · Weirmark`;
  }, [title]);
}
