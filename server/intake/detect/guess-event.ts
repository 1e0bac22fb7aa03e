import { timeColumns, type EventWords } from '../../../shared/contracts/plan.ts';
import { mayHoldTimes, mostly, type ColumnProfile } from './column-profile.ts';
import { wordScore } from './column-words.ts';
import { commonEventMeaning, guessEventWords } from './event-words.ts';
import { isTaken, type FoundColumns, type GuessReason } from './found-columns.ts';

/** An event column has few words. */
const wordsAtMost = 40;

/**
 * Where a file tells one event a row, finds the column of the event, that of its time, and the words.
 *
 * @returns null where the rows tell stays: two kinds of times have columns of their own, or none tells events
 */
export function guessEvents(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): { event: ColumnProfile; time: ColumnProfile; eventWords: EventWords } | null {
  if (timeColumns.filter((column) => found[column]).length > 1) return null;
  const [best] = profiles
    .map((profile) => ({ profile, share: eventShare(profile) }))
    .filter(({ profile, share }) => share >= mostly && profile.header !== '')
    .sort((a, b) => b.share - a.share || words(b.profile) - words(a.profile));
  if (!best) return null;
  const event = best.profile;
  const time = guessTime(profiles, found);
  if (!time) return null;
  const eventWords = guessEventWords(event.cells);
  const told = Object.values(eventWords)
    .flat()
    .slice(0, 6)
    .map((word) => `“${word}”`);
  reasons.push({
    about: 'event',
    reason: `“${event.header}” says what happened (${told.join(', ')}), so a row is an event.`,
  });
  reasons.push({ about: 'time', reason: `“${time.header}” holds the time of the event.` });
  return { event, time, eventWords };
}

const words = (profile: ColumnProfile): number => wordScore('event', profile.words);

/** Share of cells that are common words for an event of a stay. */
function eventShare({ cells, distinct, filled }: ColumnProfile): number {
  if (filled === 0 || distinct > wordsAtMost) return 0;
  const known = cells.filter((cell) => commonEventMeaning(cell) !== null);
  const telling = known.some((cell) => commonEventMeaning(cell) !== 'ignored');
  return telling ? known.length / filled : 0;
}

/** The column of the time: by its header, else the only one that holds times. */
function guessTime(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
): ColumnProfile | undefined {
  const times = profiles.filter(
    (profile) =>
      profile.header !== '' &&
      mayHoldTimes(profile) &&
      profile.filled > 0 &&
      (!isTaken(found, profile) || timeColumns.some((column) => found[column] === profile)),
  );
  const named = times
    .map((profile) => ({ profile, score: wordScore('time', profile.words) }))
    .filter(({ score }) => score > 0)
    .sort((a, b) => b.score - a.score || a.profile.place - b.profile.place);
  return named[0]?.profile ?? times.sort((a, b) => b.timeShare - a.timeShare)[0];
}
