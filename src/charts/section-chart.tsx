import type { ReactNode } from 'react';
import { BasinPicture, type BelowBasin } from './basin-picture.tsx';
import type { DrawnArrow, DrawnBasin, Section } from './section-layout.ts';

/**
 * The site as a cut through a watercourse: open basins in order of flow, filled to what is inside, waiting
 * light above in process; the mean as a tick and the peak as a whisker on the right wall, a cap as a heavy
 * mark, arrows with what leaves a day.
 *
 * @param wrap puts a basin into its link; its accessible name tells what the picture shows
 */
export function SectionChart({
  section,
  width,
  formatAmount,
  formatRate,
  below,
  wrap,
}: {
  section: Section;
  width: number;
  formatAmount: (amount: number) => string;
  formatRate: (rate: number) => string;
  below: (id: number) => BelowBasin;
  wrap: (basin: DrawnBasin, picture: ReactNode) => ReactNode;
}) {
  return (
    <svg
      width={width}
      height={section.height}
      viewBox={`0 0 ${width} ${section.height}`}
      className="block h-auto max-w-full overflow-visible"
    >
      {section.arrows.map((arrow) => (
        <Arrow key={`${arrow.x} ${arrow.y}`} arrow={arrow} formatRate={formatRate} />
      ))}
      {section.basins.map((basin) => (
        <g key={basin.id}>
          {wrap(
            basin,
            <BasinPicture
              basin={basin}
              compact={section.compact}
              formatAmount={formatAmount}
              below={below(basin.id)}
            />,
          )}
        </g>
      ))}
    </svg>
  );
}

const head = 7;

function Arrow({ arrow, formatRate }: { arrow: DrawnArrow; formatRate: (rate: number) => string }) {
  const length = Math.min(24, arrow.width - 12);
  const begins = arrow.x + (arrow.width - length) / 2 + 3;
  const y = arrow.y - 10;
  const tip = begins + length;
  return (
    <g>
      <path
        d={`M${begins} ${y - 2.5}H${tip - head}V${y - 6}L${tip} ${y}L${tip - head} ${y + 6}V${y + 2.5}H${begins}Z`}
        className="fill-water"
      />
      <text
        x={arrow.x + arrow.width / 2 + 3}
        y={arrow.y + 10}
        textAnchor="middle"
        className="fill-soft text-[11px]"
      >
        {formatRate(arrow.perDay)}
      </text>
    </g>
  );
}
