import { zoneRules } from '../../../shared/local-time.ts';
import { holdsTimes, type ColumnProfile } from './column-profile.ts';
import { DateOrderEvidence } from './date-order.ts';
import { isTaken, type FoundColumns, type GuessReason } from './found-columns.ts';
import { AutoTimeReader } from '../times/auto-time-reader.ts';
import { LocalClock } from '../times/local-clock.ts';

/**
 * Where no header says which column is the start or the finish, two columns of times tell it themselves:
 * one never lies behind the other.
 */
export function guessTimesByOrder(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): void {
  if (found.arrived ?? found.started ?? found.finished) return;
  const [one, other, third] = profiles.filter(
    (profile) => holdsTimes(profile) && profile.header !== '' && !isTaken(found, profile),
  );
  if (!one || !other || third) return;
  const start = precedes(one, other) ? one : precedes(other, one) ? other : null;
  if (start === null) return;
  const finish = start === one ? other : one;
  found.started = start;
  found.finished = finish;
  const told = `“${start.header}” never lies behind “${finish.header}”`;
  reasons.push({ about: 'started', reason: `${told}, as a start never lies behind its finish.` });
  reasons.push({ about: 'finished', reason: `${told}, as a start never lies behind its finish.` });
}

/** Whether the times of one column are before those of another in some rows, and behind them in none. */
function precedes(one: ColumnProfile, other: ColumnProfile): boolean {
  const evidence = new DateOrderEvidence();
  for (const cell of [...one.cells, ...other.cells]) evidence.add(cell);
  const order = evidence.order === 'month-first' ? 'month-first' : 'day-first';
  const reader = new AutoTimeReader(new LocalClock(zoneRules('UTC')), order);
  const read = (cell = ''): number => {
    const bytes = Buffer.from(cell);
    return cell !== '' && reader.read(bytes, 0, bytes.length) === null ? reader.micros : NaN;
  };
  const gaps = one.cells.map((cell, row) => read(other.cells[row]) - read(cell));
  return gaps.some((gap) => gap > 0) && !gaps.some((gap) => gap < 0);
}
