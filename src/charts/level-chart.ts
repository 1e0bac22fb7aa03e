import * as Plot from '@observablehq/plot';
import type { DrawnPoint } from './figure-point.ts';
import { framed, type Frame } from './frame.ts';

/**
 * Mean level by step: waiting above in process, the peak as mist, the cap as a heavy mark. Unknown steps are
 * gaps.
 */
export function levelChart(
  frame: Frame,
  points: readonly DrawnPoint[],
  ticks: readonly Date[] | null,
  cap: number | null = null,
): Plot.PlotOptions {
  const known = points.filter((point) => point.wipMean !== null);
  const line = 'wipMean';
  return framed(
    frame,
    190,
    ticks,
    [
      Plot.rect(known, {
        x1: 'start',
        x2: 'end',
        y1: 0,
        y2: 'wipPeak',
        fill: 'var(--wm-mist)',
        shapeRendering: 'crispEdges',
      }),
      Plot.rect(known, {
        x1: 'start',
        x2: 'end',
        y1: 0,
        y2: line,
        fill: 'var(--wm-wash)',
        shapeRendering: 'crispEdges',
      }),
      Plot.rect(
        known.filter((point) => point.inProcessMean !== null),
        {
          x1: 'start',
          x2: 'end',
          y1: 0,
          y2: 'inProcessMean',
          fill: 'var(--wm-deep)',
          shapeRendering: 'crispEdges',
        },
      ),
      Plot.line(edges(points, line), {
        x: 'at',
        y: 'level',
        stroke: 'var(--wm-water)',
        strokeWidth: 1.5,
      }),
      Plot.ruleY([0], { stroke: 'var(--wm-ink)' }),
      ...(cap === null
        ? []
        : [
            Plot.ruleY([cap], { stroke: 'var(--wm-ink)', strokeWidth: 3 }),
            Plot.text([cap], {
              text: (limit: number) => `cap ${limit}`,
              y: (limit: number) => limit,
              frameAnchor: 'right',
              textAnchor: 'end',
              dy: -9,
              fill: 'var(--wm-ink)',
            }),
          ]),
    ],
    {},
  );
}

/** Both borders of every step at its level: a staircase, with a gap wherever it is unknown. */
function edges(points: readonly DrawnPoint[], figure: 'wipMean') {
  return points.flatMap((point) => [
    { at: point.start, level: point[figure] ?? NaN },
    { at: point.end, level: point[figure] ?? NaN },
  ]);
}
