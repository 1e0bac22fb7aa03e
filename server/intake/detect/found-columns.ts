import type { ColumnProfile } from './column-profile.ts';
import type { OptionalColumn, TimeColumn } from '../../../shared/contracts/plan.ts';

/** What a column can be guessed to hold. */
export type GuessedColumn = 'job' | 'area' | TimeColumn | OptionalColumn | 'event' | 'time';

/** Why one part of a guess was made, or what is missing. */
export interface GuessReason {
  /** The column of the plan, or the part of it, that is spoken of. */
  about: string;
  reason: string;
}

/** Profiles of the columns that were found so far. */
export type FoundColumns = Partial<Record<GuessedColumn, ColumnProfile>>;

/** Whether a column was found to hold something already. */
export const isTaken = (found: FoundColumns, profile: ColumnProfile): boolean =>
  Object.values(found).includes(profile);
