import * as Plot from '@observablehq/plot';
import type { DrawnPoint } from './figure-point.ts';
import { framed, type Frame } from './frame.ts';

/** Arrivals up, departures down, by step. */
export function arrivalsDeparturesChart(
  frame: Frame,
  points: readonly DrawnPoint[],
  ticks: readonly Date[] | null,
): Plot.PlotOptions {
  const known = points.filter((point) => point.arrivals !== null);
  const inset = known.length > 120 ? 0 : 1;
  return framed(
    frame,
    120,
    ticks,
    [
      Plot.rect(known, {
        x1: 'start',
        x2: 'end',
        y1: 0,
        y2: 'arrivals',
        fill: 'var(--wm-water)',
        insetLeft: inset,
        insetRight: inset,
      }),
      Plot.rect(known, {
        x1: 'start',
        x2: 'end',
        y1: 0,
        y2: (point: DrawnPoint) => -(point.departures ?? 0),
        fill: 'var(--wm-slate)',
        insetLeft: inset,
        insetRight: inset,
      }),
      Plot.ruleY([0], { stroke: 'var(--wm-ink)' }),
    ],
    { tickFormat: (value: number) => String(Math.abs(value)) },
  );
}
