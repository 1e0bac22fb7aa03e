import { useQuery } from '@tanstack/react-query';
import { useMemo } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { dayMs, stepBorders, zoneRules } from '../../../shared/local-time.ts';
import { placeOn, rulerLabels, rulerTicks, type RulerScale } from '../../charts/ruler-scale.ts';
import { useWidth } from '../../charts/use-width.ts';
import { formatDay, formatPeriod } from '../../lib/format.ts';
import { PeriodPicker } from './period-picker.tsx';
import { spanQuery } from './queries.ts';
import { RulerBracket } from './ruler-bracket.tsx';
import { usePeriod, usualPeriod } from './use-period.ts';

const height = 76;
/** Where the band of loaded data lies, from the top. */
const band = { y: 22, height: 6 };

/**
 * The one control of the period, under the header of every screen: the whole loaded span, where data are
 * missing or still settle, and the period in view as a bracket.
 */
export function TimeRuler({ site }: { site: Site }) {
  const { period, setPeriod, weeksUntilNow, everything, shift } = usePeriod(site);
  const [holder, width] = useWidth<HTMLDivElement>();
  const rules = useMemo(() => zoneRules(site.timeZone), [site.timeZone]);
  const days = useMemo(() => daysOf(site, rules), [site, rules]);
  const scale: RulerScale = { from: days[0] ?? 0, to: days.at(-1) ?? 1, width };
  return (
    <section
      aria-label="Period"
      className="no-print grid border-b border-ink sm:grid-cols-[13rem_minmax(0,1fr)]"
    >
      <div className="flex flex-wrap items-baseline gap-x-4 px-4 py-2 sm:block">
        <strong className="text-label">
          {formatPeriod(period.from, period.to, site.timeZone)}
        </strong>
        <div className="flex gap-2 text-label text-soft">
          <TextButton onPress={() => weeksUntilNow(1)}>week</TextButton>
          <TextButton onPress={() => weeksUntilNow(4)}>4 weeks</TextButton>
          <TextButton onPress={everything}>all</TextButton>
        </div>
        <div className="flex gap-2 text-label text-soft">
          <TextButton onPress={() => shift(-1)}>earlier</TextButton>
          <TextButton onPress={() => shift(1)}>later</TextButton>
          <PeriodPicker site={site} period={period} onPick={setPeriod} />
        </div>
      </div>
      <div className="px-4 sm:pl-0">
        <div ref={holder} className="relative" style={{ height }}>
          {width > 0 ? (
            <>
              <RulerBracket
                scale={scale}
                days={days}
                period={{ from: Date.parse(period.from), to: Date.parse(period.to) }}
                height={height}
                nameOf={(at) => formatDay(at, site.timeZone)}
                onChange={({ from, to }) =>
                  setPeriod(
                    { from: new Date(from).toISOString(), to: new Date(to).toISOString() },
                    { replace: true },
                  )
                }
              />
              <LoadedSpan site={site} scale={scale} />
            </>
          ) : null}
        </div>
      </div>
    </section>
  );
}

/** Borders of the local days that the ruler spans: all that is loaded, or the usual period where nothing is. */
function daysOf(site: Site, rules: ReturnType<typeof zoneRules>): number[] {
  const usual = usualPeriod(site);
  const from = site.dataFrom === null ? Date.parse(usual.from) : Date.parse(site.dataFrom);
  const until = site.dataUntil === null ? Date.parse(usual.to) : Date.parse(site.dataUntil);
  // At least a week, and what the usual period covers, so that its bracket is whole.
  return stepBorders(
    rules,
    'day',
    from,
    Math.max(until + 1, Math.min(Date.parse(usual.to), until + 7 * dayMs), from + 7 * dayMs),
  );
}

/** The band of what is loaded, with its gaps and its settling end, months above and ticks below. */
function LoadedSpan({ site, scale }: { site: Site; scale: RulerScale }) {
  const { data: span } = useQuery({ ...spanQuery(site.id), enabled: site.dataUntil !== null });
  const rules = zoneRules(site.timeZone);
  const ticks = rulerTicks(scale, rules);
  const labels = rulerLabels(scale, rules);
  const place = (at: string) => placeOn(scale, Date.parse(at));
  return (
    <svg
      width={scale.width}
      height={height}
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
          y1={height}
          y2={height - (long ? 10 : 4)}
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

function TextButton({ onPress, children }: { onPress: () => void; children: string }) {
  return (
    <button
      type="button"
      onClick={onPress}
      className="min-h-6 cursor-pointer underline decoration-hair underline-offset-3 hover:text-ink hover:decoration-ink"
    >
      {children}
    </button>
  );
}
