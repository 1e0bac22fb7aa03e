import * as Plot from '@observablehq/plot';
import { useEffect, useRef } from 'react';

/** Draws one plot into the page. What it shows is told by the label and by the table behind the charts. */
export function PlotFigure({ options, label }: { options: Plot.PlotOptions; label: string }) {
  const holder = useRef<HTMLDivElement>(null);
  useEffect(() => {
    const plot = Plot.plot(options);
    // Names of parts inside a picture are read by nobody, and are not allowed on parts without a role.
    for (const part of plot.querySelectorAll('[aria-label], [aria-description]')) {
      part.removeAttribute('aria-label');
      part.removeAttribute('aria-description');
    }
    plot.setAttribute('role', 'img');
    plot.setAttribute('aria-label', label);
    holder.current?.replaceChildren(plot);
  }, [options, label]);
  return <div ref={holder} />;
}
