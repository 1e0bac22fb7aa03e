import {
  optionalColumns,
  timeColumns,
  type ColumnPlan,
  type OptionalColumn,
  type TimeColumn,
} from '../../../shared/contracts/plan.ts';
import { IntakeFailure } from '../failure.ts';

export type StayColumn = 'job' | 'area' | TimeColumn | OptionalColumn;
export const stayColumns: readonly StayColumn[] = [
  'job',
  'area',
  ...timeColumns,
  ...optionalColumns,
];

/** The place of each column of the plan among the header's cells; what is not mapped is missing. */
export type StayColumnPlaces = Partial<Record<StayColumn, number>> & { job: number; area: number };

const fold = (text: string): string =>
  text.normalize('NFC').trim().replace(/\s+/gu, ' ').toLowerCase();

/**
 * Finds the columns that a plan names in a header: as written, else without regard to case and blanks.
 *
 * @throws IntakeFailure where the header has no such column, or two of that name
 */
export function placeColumns(
  columns: ColumnPlan['columns'],
  header: readonly string[],
): StayColumnPlaces {
  const places: Partial<Record<StayColumn, number>> = {};
  for (const column of stayColumns) {
    const name = columns[column];
    if (name !== undefined) places[column] = placeOf(name, header);
  }
  return places as StayColumnPlaces;
}

function placeOf(name: string, header: readonly string[]): number {
  const exact = placesWhere(header, (cell) => cell.trim() === name.trim());
  const found = exact.length > 0 ? exact : placesWhere(header, (cell) => fold(cell) === fold(name));
  const [place, second] = found;
  if (place === undefined) throw noSuchColumn(name, header);
  if (second !== undefined) {
    throw new IntakeFailure(
      'column-twice',
      `The file has ${found.length} columns named “${name}”.`,
      'Give each column its own name in the export.',
    );
  }
  return place;
}

function placesWhere(header: readonly string[], fits: (cell: string) => boolean): number[] {
  return header.flatMap((cell, index) => (fits(cell) ? [index] : []));
}

function noSuchColumn(name: string, header: readonly string[]): IntakeFailure {
  const shown = header.slice(0, 12).map((cell) => `“${cell.trim().slice(0, 40)}”`);
  const more = header.length > shown.length ? ` and ${header.length - shown.length} more` : '';
  return new IntakeFailure(
    'no-such-column',
    `The column plan names a column “${name}”, and the file has none.`,
    `Its columns are ${shown.join(', ')}${more}. Choose among them.`,
  );
}

/** Where the columns of the plan stand that hold times. */
export function timePlaces(places: StayColumnPlaces): number[] {
  return [...timeColumns, 'due' as const].flatMap((column) => places[column] ?? []);
}
