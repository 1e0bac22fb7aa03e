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

const about = (record: RecordRow): number | undefined =>
  (record.started ?? record.arrived ?? record.finished)?.getTime();

/**
 * The rows that told one record, in order of receipt, and what each did to it. Of events, those that the
 * upload brought which brought the record are new: each tells a part of it.
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
    .map((row, index, rows) => {
      const values = valuesOf(row);
      const isOfFirst = row.event !== null && row.upload_id === rows[0]?.upload_id;
      const told = index === 0 ? 'new' : outcomeOf(values, given);
      const outcome = told === 'completing' && isOfFirst ? 'new' : told;
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
  return row.area_id === record.area_id && row.about.getTime() === about(record);
}

function outcomeOf(
  values: readonly [string, string | number][],
  given: ReadonlyMap<string, string | number>,
): VersionOutcome {
  const differing = values.filter(([field, value]) => given.get(field) !== value);
  if (differing.some(([field]) => given.has(field))) return 'correcting';
  return differing.length > 0 ? 'completing' : 'same';
}
