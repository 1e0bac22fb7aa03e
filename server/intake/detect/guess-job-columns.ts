import type { AreaColumns, TimeColumn } from '../../../shared/contracts/plan.ts';
import { foldAreaSpelling } from '../../../shared/area-spelling.ts';
import { looksLikeTimes, mayHoldTimes, type ColumnProfile } from './column-profile.ts';
import { namesNothing, timePhrases, wordsOf } from './column-words.ts';
import type { GuessReason } from './found-columns.ts';

/** Phrases that only stand for a time beside the name of an area. */
const besideAreas: readonly { column: TimeColumn; words: readonly string[] }[] = [
  { column: 'started', words: ['in'] },
  { column: 'finished', words: ['out'] },
  { column: 'started', words: ['from'] },
  { column: 'finished', words: ['to'] },
  { column: 'started', words: ['von'] },
  { column: 'finished', words: ['bis'] },
];
const phrases = [...timePhrases, ...besideAreas];

/**
 * Where a row tells a whole job, finds the columns of each area: headers that name an area before or behind
 * a word for arrival, start or finish.
 *
 * @returns null where fewer than two areas have columns of times
 */
export function guessAreaColumns(
  profiles: readonly ColumnProfile[],
  reasons: GuessReason[],
): AreaColumns[] | null {
  const areas = new Map<string, AreaColumns>();
  for (const profile of profiles) {
    const named = mayHoldTimes(profile) || looksLikeTimes(profile) ? nameOf(profile) : null;
    if (named === null) continue;
    const folded = foldAreaSpelling(named.area);
    const columns = areas.get(folded) ?? { area: named.area };
    columns[named.column] ??= profile.header;
    areas.set(folded, columns);
  }
  const found = [...areas.values()];
  if (found.length < 2) return null;
  const names = found.slice(0, 4).map(({ area }) => `“${area}”`);
  const more = found.length > names.length ? ` and ${found.length - names.length} more` : '';
  reasons.push({
    about: 'areas',
    reason: `The header has columns of times for ${names.join(', ')}${more}, so a row is a job.`,
  });
  return found;
}

/** The area and the time that a header names together, or null. */
function nameOf({ header }: ColumnProfile): { area: string; column: TimeColumn } | null {
  const tokens = [...header.matchAll(/[\p{L}\p{M}]+/gu)].map(({ 0: text, index }) => ({
    text: wordsOf(text).join(''),
    from: index,
    to: index + text.length,
  }));
  for (const { column, words } of phrases) {
    const rest = tokens.length - words.length;
    if (rest < 1) continue;
    if (words.every((word, at) => tokens[rest + at]?.text === word)) {
      return namedArea(header.slice(0, tokens[rest]?.from), column);
    }
    if (words.every((word, at) => tokens[at]?.text === word)) {
      return namedArea(header.slice(tokens[words.length - 1]?.to), column);
    }
  }
  return null;
}

function namedArea(text: string, column: TimeColumn): { area: string; column: TimeColumn } | null {
  const area = text.replace(/^[\s_\-:./|()[\]]+|[\s_\-:./|()[\]]+$/gu, '');
  return /[\p{L}\p{N}]/u.test(area) && !namesNothing(wordsOf(area)) ? { area, column } : null;
}
