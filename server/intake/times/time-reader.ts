/** The ways in which a time can be written; a column that mixes them is worth a warning. */
export const timeForms = [
  'iso-with-offset',
  'iso-local',
  'day-and-month',
  'compact',
  'serial',
  'epoch-seconds',
  'epoch-milliseconds',
  'pattern',
] as const;
export type TimeForm = (typeof timeForms)[number];

/** Why a cell is no time: it cannot be read, or only in the order of day and month that is not the file's. */
export type TimeTrouble = 'unreadable' | 'other-date-order';

/**
 * Reads cells as moments. What `read` found stays in the reader's fields until the next call: there are
 * millions of cells, and this spares an object for each.
 */
export interface TimeReader {
  /**
   * @param bytes UTF-8; the cell is [start, end), without blanks at its ends and not empty
   * @returns null where it is a time
   */
  read(bytes: Buffer, start: number, end: number): TimeTrouble | null;
  /** Microseconds since 1970 UTC; the first moment where the local clock shows it twice. */
  micros: number;
  /** The second moment of a local time that occurs twice, in microseconds, or NaN. */
  second: number;
  /** Whether it is a local time that does not occur; it was read with the offset before the gap. */
  skipped: boolean;
  form: TimeForm;
}
