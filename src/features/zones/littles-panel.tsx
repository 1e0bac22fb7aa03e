import type { Summary } from '../../../shared/contracts/figures.ts';
import { formatDuration, formatNumber, formatPeriod } from '../../lib/format.ts';
import { FigureList } from '../../ui/figure-list.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { Notice } from '../../ui/notice.tsx';

/** Little's Law on the period: both routes to L, and what the edges explain of the gap between them. */
export function LittlesPanel({ summary, timeZone }: { summary: Summary; timeZone: string }) {
  const law = summary.littlesLaw;
  const jobs = (value: number) => `${formatNumber(value, 1)} jobs`;
  const explained = Math.abs(law.unexplained) <= 1e-9 * Math.max(1, law.wipMean);
  return (
    <section className="flex flex-col gap-1">
      <PanelHeading>Little’s Law, {formatPeriod(summary.from, summary.to, timeZone)}</PanelHeading>
      <p className="py-1">L = δ·W − start + end</p>
      <FigureList
        rows={[
          ['L, from levels', jobs(law.wipMean)],
          ['δ, departures', `${formatNumber(law.departureRatePerHour, 3)} / h`],
          ['W, flow time', formatDuration(law.flowMeanSeconds)],
          ['δ·W', jobs(law.product)],
          ['start: spent before it', `− ${formatNumber(law.edgeStart, 1)}`],
          ['end: spent by those still inside', `+ ${formatNumber(law.edgeEnd, 1)}`],
          ['left unexplained', formatNumber(law.unexplained, 1)],
        ]}
      />
      {explained ? null : (
        <Notice kind="error">
          Levels and stays disagree, so derived data are wrong. Tell your administrator: the site
          has to be rebuilt.
        </Notice>
      )}
    </section>
  );
}
