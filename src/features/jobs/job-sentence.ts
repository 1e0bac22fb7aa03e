import type { JobRecord } from '../../../shared/contracts/jobs.ts';
import { formatDuration, formatMoment, listed, plural } from '../../lib/format.ts';

/** What a job's records say, in words: where it is or was last seen, how long it took, where it came back. */
export function jobSentence(records: readonly JobRecord[], timeZone: string): string {
  return [where(records, timeZone), way(records), again(records), doubt(records)]
    .filter((clause) => clause !== '')
    .join(' ');
}

function where(records: readonly JobRecord[], timeZone: string): string {
  const open = records.findLast((record) => record.left === null);
  if (open) {
    const since = formatMoment(open.entered ?? open.started ?? open.arrived, timeZone);
    return `It is in ${open.areaName} since ${since}.`;
  }
  const last = records.at(-1);
  return `It left ${last?.areaName ?? ''} ${formatMoment(last?.left ?? null, timeZone)} and was not seen since.`;
}

function way(records: readonly JobRecord[]): string {
  const areas = new Set(records.map((record) => record.areaId)).size;
  const passes = new Set(records.map((record) => record.pass)).size;
  const moments = records.flatMap(({ entered, left }) =>
    [entered, left].flatMap((at) => (at === null ? [] : [Date.parse(at)])),
  );
  const told = `${plural(records.length, 'record')} in ${plural(areas, 'area')}`;
  const span = moments.length > 1 ? (Math.max(...moments) - Math.min(...moments)) / 1000 : 0;
  const over = passes === 1 && span > 0 ? ` over ${formatDuration(span)}` : '';
  return `${told}${passes > 1 ? ` in ${passes} passes` : over}.`;
}

function again(records: readonly JobRecord[]): string {
  const visits = new Map<string, number>();
  for (const { areaName, pass } of records) {
    const key = `${pass} ${areaName}`;
    visits.set(key, (visits.get(key) ?? 0) + 1);
  }
  const back = [...visits]
    .filter(([, count]) => count > 1)
    .map(([key, count]) => {
      const name = key.slice(key.indexOf(' ') + 1);
      return `${name} ${count === 2 ? 'once' : `${count - 1} times`}`;
    });
  return back.length > 0 ? `It came back to ${listed(back)}.` : '';
}

function doubt(records: readonly JobRecord[]): string {
  const inferred = records.filter((record) => record.finishInferred).length;
  if (inferred === 0) return '';
  return `${plural(inferred, 'finish', 'finishes')} ${inferred === 1 ? 'was' : 'were'} not recorded and ${inferred === 1 ? 'is' : 'are'} inferred from later starts.`;
}
