import type { FloorRow } from '../../../shared/contracts/figures.ts';
import { formatCount, formatDuration, formatPerDay, inUnit, plural } from '../../lib/format.ts';

/** A piece of the sentence, and where its evidence is: a zone, the table of areas, or the uploads. */
export interface Clause {
  text: string;
  evidence: { zoneId: number } | 'areas' | 'uploads';
}

/** So much growth over the period is told first: a tenth of what was there, and five at least. */
const growthWorthTelling = (row: FloorRow) => Math.max(5, 0.1 * (row.wipStart ?? 0));

const growth = (row: FloorRow) => (row.wipEnd ?? 0) - (row.wipStart ?? 0);

/**
 * What the Floor's figures say, worst first: books that do not balance, areas that have grown, the site
 * as a whole, and what to mind about the data.
 */
export function floorSentence(
  rows: readonly FloorRow[],
  unit: 'jobs' | 'units',
  periodEnd: string,
): Clause[] {
  const site = rows.find((row) => row.zone.kind === 'site');
  const areas = rows.filter((row) => row.zone.kind === 'area' && row.wipMean !== null);
  if (!site || site.wipMean === null || areas.length === 0) return [];
  return [
    ...unbalanced(rows),
    ...grown(areas, unit),
    ...whole(site, unit),
    ...mind(site, rows, periodEnd),
  ];
}

function unbalanced(rows: readonly FloorRow[]): Clause[] {
  return rows
    .filter((row) => !row.books.balance)
    .map((row) => ({
      text: `The books of ${row.zone.name} do not balance: tell your administrator. `,
      evidence: { zoneId: row.zone.id },
    }));
}

function grown(areas: readonly FloorRow[], unit: 'jobs' | 'units'): Clause[] {
  const risen = areas
    .filter((row) => growth(row) >= growthWorthTelling(row))
    .sort((one, other) => growth(other) - growth(one));
  if (risen.length === 0)
    return [{ text: 'No area holds much more now than at the start. ', evidence: 'areas' }];
  return risen.slice(0, 3).map((row) => ({
    text: `${row.zone.name} holds ${inUnit(row.wipEnd, unit)}, ${formatCount(growth(row))} more than at the start: ${formatCount(row.arrivals)} came and ${formatCount(row.departures)} left. `,
    evidence: { zoneId: row.zone.id },
  }));
}

function whole(site: FloorRow, unit: 'jobs' | 'units'): Clause[] {
  const inside = site.wipEnd ?? 0;
  const flow =
    site.flowP50Seconds === null
      ? 'none has left in this period'
      : `half of those that left took at most ${formatDuration(site.flowP50Seconds)}`;
  return [
    {
      text: `On the whole site ${inside === 1 ? 'is' : 'are'} ${inUnit(inside, unit)}; ${formatPerDay(site.throughputPerHour)} leave a day, and ${flow}. `,
      evidence: { zoneId: site.zone.id },
    },
  ];
}

/** The last day need not be whole: only more than that is worth telling. */
const partialWorthTelling = 86_400_000;

function mind(site: FloorRow, rows: readonly FloorRow[], periodEnd: string): Clause[] {
  const until = site.zone.dataUntil;
  const partial = until !== null && Date.parse(periodEnd) - Date.parse(until) > partialWorthTelling;
  const warming = rows.filter((row) => row.warmingUp && row.zone.kind === 'area').length;
  return [
    ...(partial
      ? [
          {
            text: 'The period reaches past what the data speak for. ',
            evidence: 'uploads' as const,
          },
        ]
      : []),
    ...(warming > 0
      ? [
          {
            text: `At its start ${plural(warming, 'area')} still ${warming === 1 ? 'fills' : 'fill'} up from an empty log. `,
            evidence: 'areas' as const,
          },
        ]
      : []),
  ];
}
