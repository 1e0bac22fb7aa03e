import type { Summary } from '../../../shared/contracts/figures.ts';
import {
  formatCount,
  formatDuration,
  formatNumber,
  formatShare,
  inUnit,
} from '../../lib/format.ts';
import { FigureList } from '../../ui/figure-list.tsx';
import { PanelHeading } from '../../ui/heading.tsx';

/** Under so many departures a percentile says less than the jobs themselves. */
export const fewDepartures = 20;

/** The figures of the period; with few departures the percentiles give way to the list of jobs. */
export function PeriodPanel({ summary }: { summary: Summary }) {
  const few = (summary.departures ?? 0) < fewDepartures;
  const { queueMeanSeconds: queue, flowMeanSeconds: flow } = summary;
  return (
    <section className="flex flex-col gap-1">
      <PanelHeading>In this period</PanelHeading>
      <FigureList
        rows={[
          ['WIP mean', `${formatNumber(summary.wipMean, 1)} ${summary.unit}`],
          ['WIP peak', inUnit(summary.wipPeak, summary.unit)],
          ['throughput', `${formatNumber(summary.throughputPerHour, 2)} / h`],
          ['flow time, mean', formatDuration(flow)],
          few
            ? (['flow time P50 / P85 / P95', 'too few departures'] as const)
            : ([
                'flow time P50 / P85 / P95',
                [summary.flowP50Seconds, summary.flowP85Seconds, summary.flowP95Seconds]
                  .map(formatDuration)
                  .join(' / '),
              ] as const),
          ['waiting, mean', formatDuration(queue)],
          ['process, mean', formatDuration(summary.processMeanSeconds)],
          ['waiting share', formatShare(queue !== null && flow ? queue / flow : null)],
          ['age of those inside, mean', formatDuration(summary.ageMeanSeconds)],
          ['oldest inside', formatDuration(summary.oldestInsideSeconds)],
          ['servers occupied', formatShare(summary.utilisation)],
          ['departures with an inferred finish', formatCount(summary.inferredDepartures)],
        ]}
      />
    </section>
  );
}
