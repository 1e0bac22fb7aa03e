import type { RecordRow, ToldRow } from './job-path.ts';

export type VersionOutcome = 'new' | 'same' | 'completing' | 'correcting';

const fields = [
  'job_key',
  'area_id',
  'arrived',
  'started',
  'finished',
  'quantity',
  'family',
  'due',
  'priority',
  'work_content',
  'value',
  'resource',
  'status',
  'ending',
  'parent',
] as const;

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
  const given = new Map<string, string | number>();
  return told
    .filter((row) => tellsOf(row, record))
    .map((row, index) => {
      const values = valuesOf(row);
      const outcome = index === 0 ? 'new' : outcomeOf(values, given);
      for (const [field, value] of values) given.set(field, value);
      return { row, outcome };
    });
}

/** What a row tells, in values that can be compared. */
function valuesOf(row: ToldRow): [string, string | number][] {
  return fields.flatMap((field) => {
    const value = row[field];
    if (value === null) return [];
    return [[field, value instanceof Date ? value.getTime() : value]];
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
  values: readonly [string, string | number][],
  given: ReadonlyMap<string, string | number>,
): VersionOutcome {
  const differing = values.filter(([field, value]) => given.get(field) !== value);
  if (differing.some(([field]) => given.has(field))) return 'correcting';
  return differing.length > 0 ? 'completing' : 'same';
}
