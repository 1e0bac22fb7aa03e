import type { RecordRow, ToldRow } from './job-path.ts';

export type VersionOutcome = 'new' | 'same' | 'completing' | 'correcting';

const times = ['arrived', 'started', 'finished'] as const;

const about = (row: ToldRow | RecordRow): number | undefined =>
  (row.started ?? row.arrived ?? row.finished)?.getTime();

/**
 * The rows that told one record, in order of receipt, and what each did to it: by the record id where it
 * has one, else by area and start (arrival, else finish); a row that knows only the arrival belongs to
 * the record that began there.
 *
 * @param told every row that told of the job, in order of receipt
 */
export function versionsOf(
  record: RecordRow,
  told: readonly ToldRow[],
): { row: ToldRow; outcome: VersionOutcome }[] {
  const given: Partial<Record<(typeof times)[number], number>> = {};
  return told
    .filter((row) => tellsOf(row, record))
    .map((row, index) => {
      const outcome = index === 0 ? 'new' : outcomeOf(row, given);
      for (const time of times) given[time] = row[time]?.getTime() ?? given[time];
      return { row, outcome };
    });
}

function tellsOf(row: ToldRow, record: RecordRow): boolean {
  if (record.record_key !== null || row.record_key !== null)
    return row.record_key === record.record_key;
  if (row.area_id !== record.area_id) return false;
  if (about(row) === about(record)) return true;
  return (
    row.started === null &&
    row.arrived?.getTime() === record.arrived?.getTime() &&
    row.arrived !== null
  );
}

function outcomeOf(
  row: ToldRow,
  given: Partial<Record<(typeof times)[number], number>>,
): VersionOutcome {
  const told = times.filter((time) => row[time] !== null);
  if (told.some((time) => given[time] !== undefined && given[time] !== row[time]?.getTime()))
    return 'correcting';
  return told.some((time) => given[time] === undefined) ? 'completing' : 'same';
}
