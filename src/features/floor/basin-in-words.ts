import type { FloorRow } from '../../../shared/contracts/figures.ts';
import { formatCount, formatDuration, formatNumber, inUnit } from '../../lib/format.ts';

/** What the picture of a basin shows, for those who hear it. */
export function basinInWords(row: FloorRow | undefined, unit: 'jobs' | 'units'): string {
  if (!row) return '';
  const { zone, wipEnd, inProcessEnd } = row;
  const split =
    wipEnd === null || inProcessEnd === null
      ? ''
      : `, ${formatCount(wipEnd - inProcessEnd)} waiting and ${formatCount(inProcessEnd)} in process`;
  const cap = zone.cap?.unit === unit ? ` Its cap is ${formatCount(zone.cap.limit)}.` : '';
  const flow =
    row.flowP50Seconds === null
      ? 'None has left.'
      : `Half of those that left took at most ${formatDuration(row.flowP50Seconds)}.`;
  return `${zone.name}: ${inUnit(wipEnd, unit)} inside${split}; mean ${formatNumber(row.wipMean, 1)}, peak ${formatCount(row.wipPeak)}.${cap} ${flow}`;
}
