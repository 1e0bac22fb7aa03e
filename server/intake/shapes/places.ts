import {
  optionalColumns,
  timeColumns,
  type ColumnPlan,
  type OptionalColumn,
  type TimeColumn,
} from '../../../shared/contracts/plan.ts';
import { IntakeFailure } from '../failure.ts';

export type TimePlaces = Partial<Record<TimeColumn, number>>;
type OptionalPlaces = Partial<Record<OptionalColumn, number>>;

/** The place of each column of a plan among the header's cells; what is not mapped is missing. */
export type StayPlaces = {
  shape: 'stay';
  job: number;
  area: number;
  times: TimePlaces;
  optional: OptionalPlaces;
};
export type EventPlaces = {
  shape: 'event';
  job: number;
  area: number;
  event: number;
  time: number;
  optional: OptionalPlaces;
};
export type JobPlaces = {
  shape: 'job';
  job: number;
  areas: readonly { area: string; times: TimePlaces }[];
  optional: OptionalPlaces;
};
export type Places = StayPlaces | EventPlaces | JobPlaces;

/** A cell of a header as it is compared: composed, without case, its blanks made one. */
export const foldHeaderCell = (text: string): string =>
  text.normalize('NFC').trim().replace(/\s+/gu, ' ').toLowerCase();

/** What of a plan names columns. */
export type PlannedColumns =
  | Pick<Extract<ColumnPlan, { shape: 'stay' }>, 'shape' | 'columns'>
  | Pick<Extract<ColumnPlan, { shape: 'event' }>, 'shape' | 'columns'>
  | Pick<Extract<ColumnPlan, { shape: 'job' }>, 'shape' | 'columns' | 'areas'>;

/**
 * Finds the columns that a plan names in a header: as written, else without regard to case and blanks.
 *
 * @throws IntakeFailure where the header has no such column, or two of that name
 */
export function placeColumns(plan: PlannedColumns, header: readonly string[]): Places {
  const place = (name: string): number => placeOf(name, header);
  const job = place(plan.columns.job);
  const optional = placeSome(optionalColumns, plan.columns, place);
  switch (plan.shape) {
    case 'stay': {
      const times = placeSome(timeColumns, plan.columns, place);
      return { shape: 'stay', job, area: place(plan.columns.area), times, optional };
    }
    case 'event': {
      const { area, event, time } = plan.columns;
      const placed = { area: place(area), event: place(event), time: place(time) };
      return { shape: 'event', job, ...placed, optional };
    }
    case 'job': {
      const areas = plan.areas.map((columns) => ({
        area: columns.area,
        times: placeSome(timeColumns, columns, place),
      }));
      return { shape: 'job', job, areas, optional };
    }
  }
}

function placeSome<Column extends string>(
  columns: readonly Column[],
  named: Partial<Record<Column, string>>,
  place: (name: string) => number,
): Partial<Record<Column, number>> {
  const places: Partial<Record<Column, number>> = {};
  for (const column of columns) {
    const name = named[column];
    if (name !== undefined) places[column] = place(name);
  }
  return places;
}

function placeOf(name: string, header: readonly string[]): number {
  const exact = placesWhere(header, (cell) => cell.trim() === name.trim());
  const found =
    exact.length > 0
      ? exact
      : placesWhere(header, (cell) => foldHeaderCell(cell) === foldHeaderCell(name));
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
export function timePlaces(places: Places): number[] {
  const due = places.optional.due === undefined ? [] : [places.optional.due];
  switch (places.shape) {
    case 'stay':
      return [...Object.values(places.times), ...due];
    case 'event':
      return [places.time, ...due];
    case 'job':
      return [...places.areas.flatMap(({ times }) => Object.values(times)), ...due];
  }
}
