import * as Plot from '@observablehq/plot';
import type { DrawnPoint } from './figure-point.ts';
import { framed, type Frame } from './frame.ts';

/** L against δ·W by step: the gap is what the edges of a step explain. */
export function littleChart(
  frame: Frame,
  points: readonly DrawnPoint[],
  ticks: readonly Date[] | null,
): Plot.PlotOptions {
  const product = (point: DrawnPoint) =>
    point.throughputPerHour === null
      ? NaN
      : (point.throughputPerHour * (point.flowMeanSeconds ?? 0)) / 3600;
  return framed(
    frame,
    110,
    ticks,
    [
      Plot.line(points, {
        x: 'middle',
        y: (point: DrawnPoint) => point.wipMean ?? NaN,
        stroke: 'var(--wm-water)',
        strokeWidth: 1.5,
      }),
      Plot.line(points, {
        x: 'middle',
        y: product,
        stroke: 'var(--wm-ink)',
        strokeDasharray: '4 3',
      }),
      Plot.ruleY([0], { stroke: 'var(--wm-ink)' }),
    ],
    {},
  );
}
