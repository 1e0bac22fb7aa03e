import { useMemo } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { dayMs, stepBorders, zoneRules } from '../../../shared/local-time.ts';
import type { RulerScale } from '../../charts/ruler-scale.ts';
import { useWidth } from '../../charts/use-width.ts';
import { formatDay, formatPeriod } from '../../lib/format.ts';
import { LoadedSpan, rulerHeight } from './loaded-span.tsx';
import { PeriodPicker } from './period-picker.tsx';
import { RulerBracket } from './ruler-bracket.tsx';
import { usePeriod, usualPeriod } from './use-period.ts';

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
        <div ref={holder} className="relative" style={{ height: rulerHeight }}>
          {width > 0 ? (
            <>
              <RulerBracket
                scale={scale}
                days={days}
                period={{ from: Date.parse(period.from), to: Date.parse(period.to) }}
                height={rulerHeight}
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
