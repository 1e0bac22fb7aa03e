import type { SeriesPoint } from '../../shared/contracts/figures.ts';

/** A step of a series with its borders as moments, for drawing. */
export interface DrawnPoint extends Omit<SeriesPoint, 'start' | 'end'> {
  start: Date;
  end: Date;
  middle: Date;
}

export const drawn = (points: readonly SeriesPoint[]): DrawnPoint[] =>
  points.map((point) => {
    const [start, end] = [Date.parse(point.start), Date.parse(point.end)];
    return {
      ...point,
      start: new Date(start),
      end: new Date(end),
      middle: new Date((start + end) / 2),
    };
  });
