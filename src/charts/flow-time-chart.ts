import * as Plot from '@observablehq/plot';
import type { DrawnPoint } from './figure-point.ts';
import { framed, type Frame } from './frame.ts';

const day = 86_400;
const hour = 3600;

/** The unit in which flow times and ages are best read, by the longest of them. */
export function flowUnit(points: readonly DrawnPoint[]): { name: string; seconds: number } {
  const longest = Math.max(
    0,
    ...points.map((point) => Math.max(point.flowP85Seconds ?? 0, point.ageMeanSeconds ?? 0)),
  );
  if (longest > 3 * day) return { name: 'days', seconds: day };
  return longest > 2 * hour ? { name: 'hours', seconds: hour } : { name: 'minutes', seconds: 60 };
}

/**
 * Median of the flow times of those that left, with the band up to P85, and as dots the mean age of those
 * inside at the end of each step. Steps without departures are gaps.
 */
export function flowTimeChart(
  frame: Frame,
  points: readonly DrawnPoint[],
  ticks: readonly Date[] | null,
): Plot.PlotOptions {
  const { seconds } = flowUnit(points);
  const inUnit = (value: number | null) => (value === null ? NaN : value / seconds);
  return framed(
    frame,
    120,
    ticks,
    [
      Plot.areaY(points, {
        x: 'middle',
        y1: (point: DrawnPoint) => inUnit(point.flowP50Seconds),
        y2: (point: DrawnPoint) => inUnit(point.flowP85Seconds),
        fill: 'var(--wm-mist)',
      }),
      Plot.line(points, {
        x: 'middle',
        y: (point: DrawnPoint) => inUnit(point.flowP85Seconds),
        stroke: 'var(--wm-slate)',
        strokeDasharray: '3 3',
      }),
      Plot.line(points, {
        x: 'middle',
        y: (point: DrawnPoint) => inUnit(point.flowP50Seconds),
        stroke: 'var(--wm-ink)',
        strokeWidth: 1.5,
      }),
      Plot.dot(points, {
        x: 'end',
        y: (point: DrawnPoint) => inUnit(point.ageMeanSeconds),
        r: points.length < 120 ? 2 : 1,
        fill: 'var(--wm-water)',
      }),
      Plot.ruleY([0], { stroke: 'var(--wm-ink)' }),
    ],
    {},
  );
}
