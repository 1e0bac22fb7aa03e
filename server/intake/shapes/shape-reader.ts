import type { SkipReason } from '../../../shared/row-reasons.ts';
import type { AreaRegister } from '../area-register.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import type { Refusal } from '../refusal.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import type { TimeReader } from '../times/time-reader.ts';
import type { RowFrame } from './row-frame.ts';
import type { TimeBounds } from './stay-times.ts';

/** By what rows are judged, whatever their shape. */
export interface RowRules {
  frame: RowFrame;
  times: TimeReader;
  bounds: TimeBounds;
  areas: AreaRegister;
  refuseUnknownAreas: boolean;
}

export type RowOutcome = 'accepted' | 'skipped' | 'refused';

/** What an accepted row says; moments in microseconds since 1970 UTC, NaN where it does not say them. */
export interface Told {
  job: string | null;
  area: string | null;
  arrived: number;
  started: number;
  finished: number;
}

/**
 * Reads rows of one shape and holds them to the rules. What it found stays in its fields until it is called
 * again. A row of the file may give several rows of the account: `next` goes on to each.
 */
export interface ShapeReader {
  /** The columns of the staging table that `write` fills, in its order. */
  readonly stagedColumns: readonly string[];
  /** Which part of the row is in hand; 0 where a row gives one row of the account. */
  readonly part: number;
  /** Bits of the warnings with which it was accepted. */
  readonly warnings: number;
  readonly skipReason: SkipReason;
  readonly refusal: Refusal | null;
  /** @throws IntakeFailure where the row names one area too many for a file */
  read(row: ScannedRow): RowOutcome;
  /** Goes on to the next part of the row in hand; null where there is none. */
  next(): RowOutcome | null;
  /** Writes what was accepted, a field for each of `stagedColumns`. */
  write(copy: BinaryCopy, line: number): void;
  told(): Told;
}
