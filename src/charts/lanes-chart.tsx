import type { ReactNode } from 'react';
import type { DrawnVisit, Lanes } from './lanes-layout.ts';
import { shortened } from './shortened.ts';

const laneHeight = 26;
const barHeight = 16;
const foot = 22;
export const laneNamesWidth = 128;

const middleOf = (lane: number) => lane * laneHeight + laneHeight / 2 + 6;

/**
 * Visits as bars in lanes over one time axis: waiting light, in process dark, an unknown split outlined, an
 * open end broken. Thin lines lead from one visit to the next; later visits to a lane carry their number.
 *
 * @param wrap puts a bar into its link; its accessible name tells what the bar shows
 */
export function LanesChart({
  lanes,
  width,
  formatTick,
  wrap,
}: {
  lanes: Lanes;
  width: number;
  formatTick: (at: number, withTime: boolean) => string;
  wrap: (visit: DrawnVisit, picture: ReactNode) => ReactNode;
}) {
  const bottom = lanes.names.length * laneHeight + 12;
  return (
    <svg
      width={width}
      height={bottom + foot}
      viewBox={`0 0 ${width} ${bottom + foot}`}
      className="block h-auto max-w-full overflow-visible"
    >
      {lanes.names.map((name, lane) => (
        <g key={name}>
          <text x={0} y={middleOf(lane) + 4} className="fill-ink text-label">
            {shortened(name, 17)}
          </text>
          <line
            x1={laneNamesWidth}
            x2={width}
            y1={middleOf(lane)}
            y2={middleOf(lane)}
            className="stroke-hair"
          />
        </g>
      ))}
      <g transform={`translate(${laneNamesWidth} 0)`}>
        <Axis lanes={lanes} bottom={bottom} formatTick={formatTick} />
        {lanes.passes.map(({ x, pass }) => (
          <g key={pass}>
            <line x1={x} x2={x} y1={0} y2={bottom} className="stroke-ink" strokeDasharray="4 3" />
            <text x={x + 4} y={9} className="fill-ink text-[11px]">
              pass {pass}
            </text>
          </g>
        ))}
        {lanes.steps.map(({ x1, lane1, x2, lane2 }) => (
          <path
            key={`${x1} ${x2} ${lane1} ${lane2}`}
            d={`M${x1} ${middleOf(lane1)}V${middleOf(lane2)}H${x2}`}
            fill="none"
            className="stroke-slate"
          />
        ))}
        {lanes.visits.map((visit) => (
          <g key={visit.id}>{wrap(visit, <Bar visit={visit} />)}</g>
        ))}
      </g>
    </svg>
  );
}

function Bar({ visit }: { visit: DrawnVisit }) {
  const { x, width, splitX, isOpen } = visit;
  const y = middleOf(visit.lane) - barHeight / 2;
  const split = Math.min(x + width, Math.max(x, splitX ?? x));
  return (
    <>
      <rect x={x - 4} y={y - 4} width={width + 8} height={barHeight + 8} fill="transparent" />
      {splitX === null ? (
        <rect
          x={x}
          y={y}
          width={width}
          height={barHeight}
          className="fill-panel stroke-water"
          strokeDasharray="3 2"
        />
      ) : (
        <>
          <rect x={x} y={y} width={split - x} height={barHeight} className="fill-wash" />
          <rect
            x={split}
            y={y}
            width={Math.max(split === x + width ? 0 : 1, x + width - split)}
            height={barHeight}
            className="fill-water"
          />
        </>
      )}
      {isOpen ? (
        <path
          d={`M${x + width} ${y - 2}l4 5l-4 5l4 5l-4 5`}
          fill="none"
          className="stroke-ink"
          strokeWidth={1.5}
        />
      ) : null}
      {visit.visit > 1 ? (
        <text x={x} y={y - 2} className="fill-ink text-[11px]">
          {visit.visit}
        </text>
      ) : null}
    </>
  );
}

function Axis({
  lanes,
  bottom,
  formatTick,
}: {
  lanes: Lanes;
  bottom: number;
  formatTick: (at: number, withTime: boolean) => string;
}) {
  return lanes.ticks.map(({ x, at }) => (
    <g key={at}>
      <line x1={x} x2={x} y1={0} y2={bottom} className="stroke-hair" />
      <text x={x} y={bottom + 15} textAnchor="middle" className="fill-soft text-[11px]">
        {formatTick(at, lanes.withTime)}
      </text>
    </g>
  ));
}
