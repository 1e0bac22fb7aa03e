import { useMemo, useState, type KeyboardEvent, type MouseEvent } from 'react';
import type { SeriesPoint } from '../../shared/contracts/figures.ts';
import { formatCount, formatDuration, formatMoment, formatNumber } from '../lib/format.ts';
import { arrivalsDeparturesChart } from './arrivals-departures-chart.ts';
import { drawn, type DrawnPoint } from './figure-point.ts';
import { flowTimeChart, flowUnit } from './flow-time-chart.ts';
import { placeOf, timeAt, timeTicks, type Frame } from './frame.ts';
import { levelChart } from './level-chart.ts';
import { littleChart } from './little-chart.ts';
import { PlotFigure } from './plot-figure.tsx';
import { useWidth } from './use-width.ts';

/**
 * The charts of a zone under each other on one time axis, with one cursor through all: by pointer, or by
 * the arrow keys. A click or Enter picks the moment.
 */
export function StackedCharts({
  points,
  timeZone,
  unit,
  step,
  cap,
  onPick,
}: {
  points: readonly SeriesPoint[];
  timeZone: string;
  unit: string;
  step: string;
  /** A cap in the unit shown, where there is one. */
  cap: number | null;
  onPick: (at: Date) => void;
}) {
  const [holder, width] = useWidth<HTMLDivElement>();
  const [cursor, setCursor] = useState<Date | null>(null);
  const steps = useMemo(() => drawn(points), [points]);
  const frame = useMemo(() => frameOf(steps, width, timeZone), [steps, width, timeZone]);
  const under = steps.find((each) => cursor && each.start <= cursor && cursor < each.end) ?? null;

  const follow = (event: MouseEvent<HTMLDivElement>) => {
    if (!frame) return;
    setCursor(timeAt(frame, event.clientX - event.currentTarget.getBoundingClientRect().left));
  };
  const steer = (event: KeyboardEvent<HTMLDivElement>) => {
    const now = under ? steps.indexOf(under) : -1;
    const next = { ArrowLeft: now - 1, ArrowRight: now + 1, Home: 0, End: steps.length - 1 }[
      event.key
    ];
    if (next !== undefined) {
      event.preventDefault();
      setCursor(steps[Math.min(steps.length - 1, Math.max(0, next))]?.middle ?? null);
    } else if ((event.key === 'Enter' || event.key === ' ') && cursor) {
      event.preventDefault();
      onPick(cursor);
    }
  };
  return (
    <div>
      <div
        ref={holder}
        className="relative cursor-crosshair"
        tabIndex={0}
        role="application"
        aria-label="Charts on one time axis. Arrow keys move the cursor, Enter lists who was inside then."
        onMouseMove={follow}
        onMouseLeave={() => setCursor(null)}
        onClick={(event) => {
          follow(event);
          if (frame)
            onPick(timeAt(frame, event.clientX - event.currentTarget.getBoundingClientRect().left));
        }}
        onKeyDown={steer}
      >
        {frame ? <Charts frame={frame} steps={steps} unit={unit} step={step} cap={cap} /> : null}
        {frame && cursor ? (
          <svg
            className="pointer-events-none absolute inset-0"
            width={frame.width}
            height="100%"
            aria-hidden="true"
          >
            <line
              x1={placeOf(frame, cursor)}
              x2={placeOf(frame, cursor)}
              y1="0"
              y2="100%"
              className="stroke-ink"
            />
          </svg>
        ) : null}
      </div>
      <CursorFoot point={under} unit={unit} timeZone={timeZone} />
    </div>
  );
}

function frameOf(steps: readonly DrawnPoint[], width: number, timeZone: string): Frame | null {
  const [first, last] = [steps[0], steps.at(-1)];
  return first && last && width > 0 ? { width, from: first.start, to: last.end, timeZone } : null;
}

function Charts({
  frame,
  steps,
  unit,
  step,
  cap,
}: {
  frame: Frame;
  steps: readonly DrawnPoint[];
  unit: string;
  step: string;
  cap: number | null;
}) {
  const charts = useMemo(() => {
    const ticks = timeTicks(
      frame,
      steps.map((each) => each.start),
    );
    return [
      {
        title: 'WIP level',
        about: `${unit}, waiting above in process, peak behind`,
        options: levelChart(frame, steps, null, cap),
      },
      {
        title: 'Arrivals and departures',
        about: `${unit} per ${step}, arrivals up, departures down`,
        options: arrivalsDeparturesChart(frame, steps, null),
      },
      {
        title: 'Flow time',
        about: `${flowUnit(steps).name}, median and P85 of those that left; dots: mean age of those inside`,
        options: flowTimeChart(frame, steps, null),
      },
      {
        title: 'L against δ·W',
        about: 'jobs, by step; the gap is what the edges explain',
        options: littleChart(frame, steps, ticks),
      },
    ];
  }, [frame, steps, unit, step, cap]);
  return charts.map(({ title, about, options }) => (
    <section key={title} className="mb-2">
      <h2 className="text-body">
        <strong>{title}</strong> <span className="text-soft">{about}</span>
      </h2>
      <PlotFigure options={options} label={`${title}: ${about}`} />
    </section>
  ));
}

/** The values under the cursor; room is kept for them, so that nothing jumps. */
function CursorFoot({
  point,
  unit,
  timeZone,
}: {
  point: DrawnPoint | null;
  unit: string;
  timeZone: string;
}) {
  return (
    <p aria-live="polite" className="min-h-10 border-t border-hair pt-1 text-label">
      {point ? (
        <>
          <strong>{formatMoment(point.start, timeZone)}</strong>: mean{' '}
          {formatNumber(point.wipMean, 1)} {unit}, peak {formatCount(point.wipPeak)},{' '}
          {formatCount(point.arrivals)} in, {formatCount(point.departures)} out, flow time median{' '}
          {formatDuration(point.flowP50Seconds)}, P85 {formatDuration(point.flowP85Seconds)}, age of
          those inside {formatDuration(point.ageMeanSeconds)}
        </>
      ) : (
        <span className="text-soft">
          Move over the charts, or focus them and use the arrow keys. Click or Enter lists who was
          inside.
        </span>
      )}
    </p>
  );
}
