import { useQuery } from '@tanstack/react-query';
import type { Site } from '../../../shared/contracts/sites.ts';
import { zoneRules } from '../../../shared/local-time.ts';
import { placeOn, rulerLabels, rulerTicks, type RulerScale } from '../../charts/ruler-scale.ts';
import { formatDay } from '../../lib/format.ts';
import { spanQuery } from './queries.ts';

export const rulerHeight = 76;
/** Where the band of loaded data lies, from the top. */
const band = { y: 22, height: 6 };

/** The band of what is loaded, with its gaps and its settling end, months above and ticks below. */
export function LoadedSpan({ site, scale }: { site: Site; scale: RulerScale }) {
  const { data: span } = useQuery({ ...spanQuery(site.id), enabled: site.dataUntil !== null });
  const rules = zoneRules(site.timeZone);
  const ticks = rulerTicks(scale, rules);
  const labels = rulerLabels(scale, rules);
  const place = (at: string) => placeOn(scale, Date.parse(at));
  return (
    <svg
      width={scale.width}
      height={rulerHeight}
      className="pointer-events-none absolute inset-0"
      role="img"
      aria-label={spanInWords(site, span)}
    >
      {labels.map(({ x, text }) => (
        <text key={text} x={x + 5} y={16} className="fill-soft text-[11px]">
          {text}
        </text>
      ))}
      {span?.from && span.until ? (
        <Band
          from={place(span.from)}
          until={place(span.latest ?? span.until)}
          settling={span.settlingFrom === null ? null : place(span.settlingFrom)}
          gaps={span.gaps.map((gap) => ({ from: place(gap.from), to: place(gap.to) }))}
        />
      ) : (
        <text
          x={scale.width / 2}
          y={band.y + 10}
          textAnchor="middle"
          className="fill-soft text-[11px]"
        >
          {site.dataUntil === null ? 'no data yet' : ''}
        </text>
      )}
      {ticks.map(({ x, long }) => (
        <line
          key={`${x} ${long}`}
          x1={x}
          x2={x}
          y1={rulerHeight}
          y2={rulerHeight - (long ? 10 : 4)}
          className={long ? 'stroke-ink' : 'stroke-soft'}
          shapeRendering="crispEdges"
        />
      ))}
    </svg>
  );
}

function Band(given: {
  from: number;
  until: number;
  settling: number | null;
  gaps: readonly { from: number; to: number }[];
}) {
  const sure = given.settling ?? given.until;
  return (
    <>
      <rect
        x={given.from}
        y={band.y}
        width={Math.max(0, sure - given.from)}
        height={band.height}
        className="fill-wash"
      />
      {given.settling === null ? null : (
        <rect
          x={given.settling}
          y={band.y + 0.5}
          width={Math.max(2, given.until - given.settling)}
          height={band.height - 1}
          className="fill-paper stroke-water"
          strokeDasharray="2 2"
        >
          <title>settling: later exports may still change these days</title>
        </rect>
      )}
      {given.gaps.map(({ from, to }) => (
        <rect
          key={from}
          x={from}
          y={band.y - 1.5}
          width={Math.max(2, to - from)}
          height={band.height + 3}
          className="fill-paper stroke-soft"
          strokeDasharray="1 2"
        >
          <title>nothing was recorded in these days</title>
        </rect>
      ))}
    </>
  );
}

function spanInWords(
  site: Site,
  span: { settlingFrom: string | null; gaps: { from: string; to: string }[] } | undefined,
): string {
  if (site.dataFrom === null || site.dataUntil === null) return 'No data are loaded yet.';
  const day = (at: string) => formatDay(at, site.timeZone);
  const gaps = (span?.gaps ?? []).map(
    (gap) => ` Nothing was recorded from ${day(gap.from)} to ${day(gap.to)}.`,
  );
  const settling = span?.settlingFrom
    ? ` From ${day(span.settlingFrom)} on figures may still settle.`
    : '';
  return `Data are loaded from ${day(site.dataFrom)} to ${day(site.dataUntil)}.${gaps.join('')}${settling}`;
}
