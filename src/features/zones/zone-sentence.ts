import type { Summary } from '../../../shared/contracts/figures.ts';
import type { Zone } from '../../../shared/contracts/zones.ts';
import {
  formatCount,
  formatDuration,
  formatMoment,
  formatNumber,
  inUnit,
} from '../../lib/format.ts';
import { fewDepartures } from './period-panel.tsx';

/** What a zone's figures say, in words, from the same figures. */
export function zoneSentence(zone: Zone, summary: Summary, timeZone: string): string {
  if (summary.wipMean === null) return `There are no data of ${nameOf(zone)} yet.`;
  return [
    level(zone, summary),
    flow(summary),
    ...ends(summary),
    ...minding(summary, timeZone),
  ].join(' ');
}

const nameOf = (zone: Zone) => (zone.kind === 'site' ? 'the whole site' : zone.name);
const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1);

function level(zone: Zone, summary: Summary): string {
  const change = (summary.wipEnd ?? 0) - (summary.wipStart ?? 0);
  const than =
    change === 0
      ? 'as many as at the start'
      : `${formatCount(Math.abs(change))} ${change > 0 ? 'more' : 'fewer'} than at the start`;
  return `${capital(nameOf(zone))} holds ${inUnit(summary.wipEnd, summary.unit)}, ${than}; on average ${formatNumber(summary.wipMean, 1)} were inside.`;
}

function flow(summary: Summary): string {
  const departures = summary.departures ?? 0;
  if (departures === 0) return 'Nothing left in this period.';
  if (departures < fewDepartures)
    return `Only ${formatCount(departures)} left, too few for percentiles: the jobs are listed.`;
  return `Half of those that left took at most ${formatDuration(summary.flowP50Seconds)}, 85 of 100 at most ${formatDuration(summary.flowP85Seconds)}.`;
}

/** Departures that were no good ones. */
function ends({ scrapped, cancelled, unit }: Summary): string[] {
  const told = [
    ...(scrapped > 0 ? [`${inUnit(scrapped, unit)} scrapped`] : []),
    ...(cancelled > 0 ? [`${inUnit(cancelled, unit)} cancelled`] : []),
  ];
  return told.length > 0 ? [`Of the departures ${told.join(' and ')}, the rest were good.`] : [];
}

function minding(summary: Summary, timeZone: string): string[] {
  return [
    ...(summary.partial && summary.dataUntil
      ? [
          `The data speak until ${formatMoment(summary.dataUntil, timeZone)}; after that the level is kept.`,
        ]
      : []),
    ...(summary.warmingUp ? ['At its start the zone still fills up from an empty log.'] : []),
    ...(summary.approximate ? ['Percentiles are within 1 %.'] : []),
  ];
}
