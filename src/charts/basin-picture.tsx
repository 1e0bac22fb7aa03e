import type { DrawnBasin } from './section-layout.ts';
import { SmallLevels } from './small-levels.tsx';

/** What stands below a basin: lines of text, and its level by step. */
export interface BelowBasin {
  lines: readonly string[];
  levels: readonly (number | null)[];
}

/** One area of the section: its walls, what is in it, and what stands below. */
export function BasinPicture({
  basin,
  compact,
  formatAmount,
  below,
}: {
  basin: DrawnBasin;
  compact: boolean;
  formatAmount: (amount: number) => string;
  below: BelowBasin;
}) {
  const { x, width, top, floor, levelY } = basin;
  const middle = x + width / 2;
  const size = compact ? 15 : 22;
  // Where the water stands too high for the number to stand on it, it stands in it.
  const onWater = levelY - 7 - size > top;
  return (
    <>
      <rect x={x} y={top - 22} width={width} height={floor - top + 24} fill="transparent" />
      <text
        x={x}
        y={top - 9}
        className={`fill-ink font-medium group-hover:underline ${compact ? 'text-label' : 'text-body'}`}
      >
        {basin.label}
      </text>
      <rect x={x} y={top} width={width} height={floor - top} className="fill-white" />
      <Water basin={basin} />
      <path
        d={`M${x} ${top}V${floor}H${x + width}V${top}`}
        fill="none"
        className="stroke-ink"
        strokeWidth={1.5}
      />
      <WallMarks basin={basin} />
      {onWater ? null : (
        <Plate x={middle} y={levelY + 4} text={formatAmount(basin.level)} size={size} />
      )}
      <text
        x={middle}
        y={onWater ? levelY - 7 : levelY + size + 3}
        textAnchor="middle"
        className="fill-ink font-medium"
        style={{ fontSize: size }}
      >
        {formatAmount(basin.level)}
      </text>
      {compact ? null : (
        <g transform={`translate(${x} ${floor + 18})`}>
          <SmallLevels levels={below.levels} width={width} height={30} />
        </g>
      )}
      {below.lines.map((line, index) => (
        <text
          key={line}
          x={x}
          y={floor + (compact ? 16 : 66) + index * 16}
          className={`text-label ${index === 0 ? 'fill-ink' : 'fill-soft'}`}
        >
          {line}
        </text>
      ))}
    </>
  );
}

/** What a number stands on in the water, so that it is read as on white. */
function Plate({ x, y, text, size }: { x: number; y: number; text: string; size: number }) {
  const width = text.length * size * 0.62 + 8;
  return <rect x={x - width / 2} y={y} width={width} height={size + 4} className="fill-white" />;
}

/** Waiting above in process; one colour where they cannot be told apart. */
function Water({ basin }: { basin: DrawnBasin }) {
  const { x, width, floor, levelY, inProcessY } = basin;
  return (
    <>
      <rect x={x} y={levelY} width={width} height={floor - levelY} className="fill-wash" />
      {basin.inProcess === null ? null : (
        <rect
          x={x}
          y={inProcessY}
          width={width}
          height={floor - inProcessY}
          className="fill-deep"
        />
      )}
      <line
        x1={x}
        x2={x + width}
        y1={levelY}
        y2={levelY}
        className="stroke-water"
        strokeWidth={2}
      />
    </>
  );
}

/** On the right wall the mean as a tick and the peak as a whisker; across it the cap, as a heavy mark. */
function WallMarks({ basin }: { basin: DrawnBasin }) {
  const wall = basin.x + basin.width;
  return (
    <>
      <path
        d={`M${wall + 5} ${basin.meanY}V${basin.peakY}M${wall + 2} ${basin.peakY}H${wall + 8}`}
        fill="none"
        className="stroke-soft"
      />
      <line
        x1={wall}
        x2={wall + 9}
        y1={basin.meanY}
        y2={basin.meanY}
        className="stroke-ink"
        strokeWidth={2}
      />
      {basin.capY === null ? null : (
        <line
          x1={basin.x - 6}
          x2={wall + 6}
          y1={basin.capY}
          y2={basin.capY}
          className="stroke-ink"
          strokeWidth={4}
        />
      )}
    </>
  );
}
