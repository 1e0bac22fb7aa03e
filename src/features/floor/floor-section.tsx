import { Link, useSearchParams } from 'react-router-dom';
import type { FloorLevels, FloorRow } from '../../../shared/contracts/figures.ts';
import { SectionChart } from '../../charts/section-chart.tsx';
import { layoutSection, type Basin } from '../../charts/section-layout.ts';
import { useWidth } from '../../charts/use-width.ts';
import { formatCount, formatDuration, formatNumber } from '../../lib/format.ts';
import { basinInWords } from './basin-in-words.ts';

/** Room on the right for the marks on the last basin's wall. */
const marksRoom = 14;

/** The areas of a site as a section: how full each is, and how fast it runs. A basin opens its area. */
export function FloorSection({
  rows,
  levels,
  days,
  unit,
  linkTo,
}: {
  rows: readonly FloorRow[];
  levels: FloorLevels | undefined;
  /** Length of the period, in days. */
  days: number;
  unit: 'jobs' | 'units';
  linkTo: (zoneId: number) => string;
}) {
  const [holder, width] = useWidth<HTMLDivElement>();
  const [scale, setScale] = useScale();
  const areas = rows.filter((row) => row.zone.kind === 'area' && row.wipEnd !== null);
  const section = layoutSection(
    areas.map((row) => basinOf(row, days, unit)),
    width - marksRoom,
    scale,
  );
  const rowOf = (id: number) => areas.find((row) => row.zone.id === id);
  return (
    <section aria-label="Section of the site" className="flex flex-col gap-2">
      <div ref={holder}>
        {width > 0 ? (
          <SectionChart
            section={section}
            width={width}
            formatAmount={formatCount}
            formatRate={(rate) => formatNumber(rate, 1)}
            below={(id) => ({
              lines: flowLines(rowOf(id), section.compact),
              levels: levels?.zones.find((zone) => zone.zoneId === id)?.wipMean ?? [],
            })}
            wrap={(basin, picture) => (
              <Link to={linkTo(basin.id)} className="group no-underline">
                <g role="img" aria-label={basinInWords(rowOf(basin.id), unit)}>
                  {picture}
                </g>
              </Link>
            )}
          />
        ) : null}
      </div>
      <Legend scale={scale} onScale={setScale} />
    </section>
  );
}

function basinOf(row: FloorRow, days: number, unit: 'jobs' | 'units'): Basin {
  return {
    id: row.zone.id,
    name: row.zone.name,
    place: row.zone.position ?? 0,
    level: row.wipEnd ?? 0,
    inProcess: row.inProcessEnd,
    mean: row.wipMean ?? 0,
    peak: row.wipPeak ?? 0,
    cap: row.zone.cap?.unit === unit ? row.zone.cap.limit : null,
    perDay: (row.departures ?? 0) / days,
  };
}

function flowLines(row: FloorRow | undefined, compact: boolean): string[] {
  if (!row || row.flowP50Seconds === null) return ['none left'];
  const half = formatDuration(row.flowP50Seconds);
  return compact ? [half] : [half, `P85 ${formatDuration(row.flowP85Seconds)}`];
}

/** One scale for all basins, or each its own: in the address, so that a view can be sent. */
function useScale(): ['shared' | 'own', (scale: 'shared' | 'own') => void] {
  const [search, setSearch] = useSearchParams();
  const setScale = (scale: 'shared' | 'own') =>
    setSearch(
      (before) => {
        const next = new URLSearchParams(before);
        if (scale === 'own') next.set('scale', 'own');
        else next.delete('scale');
        return next;
      },
      { replace: true },
    );
  return [search.get('scale') === 'own' ? 'own' : 'shared', setScale];
}

function Legend({
  scale,
  onScale,
}: {
  scale: 'shared' | 'own';
  onScale: (scale: 'shared' | 'own') => void;
}) {
  return (
    <div className="flex flex-wrap items-center gap-x-5 gap-y-1 text-label text-soft">
      <Sign className="bg-wash">waiting</Sign>
      <Sign className="bg-deep">in process</Sign>
      <span>right wall: ━ mean, ┬ peak</span>
      <span>arrow: leaving a day</span>
      <span>below: level by day, flow time P50 and P85</span>
      <button
        type="button"
        onClick={() => onScale(scale === 'shared' ? 'own' : 'shared')}
        className="no-print min-h-6 cursor-pointer underline underline-offset-3 hover:text-ink"
      >
        {scale === 'shared'
          ? 'All on one scale: give each its own'
          : 'Each on its own scale: use one for all'}
      </button>
    </div>
  );
}

const Sign = ({ className, children }: { className: string; children: string }) => (
  <span className="inline-flex items-center gap-1.5">
    <span aria-hidden="true" className={`inline-block h-3 w-4 border border-soft ${className}`} />
    {children}
  </span>
);
