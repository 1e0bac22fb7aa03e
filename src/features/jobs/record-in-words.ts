import type { JobRecord } from '../../../shared/contracts/jobs.ts';
import { formatDuration, formatMoment } from '../../lib/format.ts';

/** Where a record stands on the page. */
export const recordAnchor = ({ record, areaId }: JobRecord): string =>
  `record-${record.uploadId}-${record.line}-${areaId}`;

/** One record in words: where, from when to when, and how long. */
export function recordInWords(record: JobRecord, timeZone: string): string {
  const { areaName, entered, left, queueSeconds, processSeconds } = record;
  const split =
    queueSeconds === null || processSeconds === null
      ? ''
      : `, ${formatDuration(queueSeconds)} waiting and ${formatDuration(processSeconds)} in process`;
  if (left === null)
    return `${areaName}: since ${formatMoment(entered ?? record.started, timeZone)}, still inside.`;
  const inferred = record.finishInferred ? ' (finish inferred from a later start)' : '';
  if (entered === null) return `${areaName}: left ${formatMoment(left, timeZone)}${inferred}.`;
  return `${areaName}: ${formatMoment(entered, timeZone)} to ${formatMoment(left, timeZone)}${inferred}, ${formatDuration(record.flowSeconds)}${split}.`;
}
