import type * as Plot from '@observablehq/plot';
import { formatDay } from '../lib/format.ts';

/** What all charts over one time axis share, so that one cursor fits them all. */
export interface Frame {
  width: number;
  from: Date;
  to: Date;
  timeZone: string;
}

export const marginLeft = 48;
export const marginRight = 12;

const text = { fontFamily: '"Roboto Mono", monospace', fontSize: '12px' };

/** Few ticks at the steps' starts, so that labels tell the site's days. */
export function timeTicks(frame: Frame, starts: readonly Date[]): Date[] {
  const most = Math.max(2, Math.floor((frame.width - marginLeft - marginRight) / 110));
  const every = Math.max(1, Math.ceil(starts.length / most));
  return starts.filter((_, index) => index % every === 0);
}

/** The options of one chart of the stack. */
export function framed(
  frame: Frame,
  height: number,
  ticks: readonly Date[] | null,
  marks: Plot.Markish[],
  y: Plot.ScaleOptions,
): Plot.PlotOptions {
  return {
    width: frame.width,
    height,
    marginLeft,
    marginRight,
    marginTop: 8,
    marginBottom: ticks ? 26 : 8,
    style: { ...text, color: 'var(--wm-soft)', background: 'transparent', overflow: 'visible' },
    x: {
      type: 'utc',
      domain: [frame.from, frame.to],
      label: null,
      ticks: ticks ? [...ticks] : [],
      tickFormat: (at: Date) => formatDay(at, frame.timeZone).replace(/ \d{4}$/, ''),
      tickSize: ticks ? 4 : 0,
    },
    y: { label: null, ticks: 4, nice: true, grid: true, zero: true, ...y },
    marks,
  };
}

/** The moment under a place across the chart, and back. */
export function timeAt(frame: Frame, x: number): Date {
  const inner = frame.width - marginLeft - marginRight;
  const share = Math.min(1, Math.max(0, (x - marginLeft) / inner));
  return new Date(frame.from.getTime() + share * (frame.to.getTime() - frame.from.getTime()));
}

export function placeOf(frame: Frame, at: Date): number {
  const inner = frame.width - marginLeft - marginRight;
  const span = frame.to.getTime() - frame.from.getTime();
  return marginLeft + ((at.getTime() - frame.from.getTime()) / span) * inner;
}
