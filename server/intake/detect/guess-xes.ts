import type { EventKind, EventWords } from '../../../shared/contracts/plan.ts';
import type { ColumnProfile } from './column-profile.ts';
import { commonEventMeaning, guessEventWords } from './event-words.ts';
import type { GuessReason } from './found-columns.ts';
import { wholeHeaderScore, wordScore } from './column-words.ts';
import { mayHold } from './guess-by-words.ts';
import type { ColumnGuess } from './guess-columns.ts';

/**
 * The attributes of IEEE 1849-2016 (annex A, the concept, lifecycle, time, organisational and identity
 * extensions) by which an event log says who did what, and where they are missing, what that means.
 */
const keys = {
  job: ['trace concept:name', 'trace identity:id'],
  area: ['event concept:name'],
  event: ['event lifecycle:transition'],
  time: ['event time:timestamp'],
  resource: ['event org:resource'],
  record: ['event identity:id'],
} as const;
type XesColumn = keyof typeof keys;

const why: Readonly<Record<XesColumn, string>> = {
  job: 'names the trace, which is the job',
  area: 'names the activity, which is the area',
  event: 'says what happened by the life cycle of IEEE 1849, so a row is an event',
  time: 'is the time of the event',
  resource: 'names who did it',
  record: 'is the event’s own id',
};

const sought: Readonly<Partial<Record<XesColumn, string>>> = {
  job: 'No trace of the log has a concept:name, which would be the job.',
  area: 'No event of the log has a concept:name, which would be the area.',
  time: 'No event of the log has a time:timestamp.',
};

/**
 * The standard transactional life cycle of IEEE 1849-2016: all its words, since those that are rare may only
 * come later in the log.
 */
const lifeCycle: Readonly<Partial<Record<EventKind, readonly string[]>>> = {
  arrived: ['schedule', 'assign'],
  started: ['start'],
  finished: ['complete'],
  cancelled: ['ate_abort', 'pi_abort', 'withdraw'],
  ignored: ['reassign', 'suspend', 'resume', 'autoskip', 'manualskip', 'unknown'],
};

/** Guesses the columns of an event log by the keys of the standard's extensions. */
export function guessXes(profiles: readonly ColumnProfile[]): ColumnGuess {
  const reasons: GuessReason[] = [];
  const found = findKeys(profiles, reasons);
  const missing = Object.entries(sought)
    .filter(([about]) => !found[about as XesColumn])
    .map(([about, reason]) => ({ about, reason }));
  const told = { reasons: [...reasons, ...missing], missing: missing.map(({ reason }) => reason) };
  const { job, area, event, time, resource, record } = found;
  if (!job || !area || !time) return { planned: null, ...told };
  const optional = {
    ...(resource ? { resource: resource.header } : {}),
    ...(record ? { record: record.header } : {}),
    ...namedByWords(profiles, reasons),
  };
  const base = { job: job.header, area: area.header, ...optional };
  if (event) {
    const columns = { ...base, event: event.header, time: time.header };
    return { planned: { shape: 'event', columns, eventWords: wordsOf(event) }, ...told };
  }
  return { planned: { shape: 'stay', columns: { ...base, finished: time.header } }, ...told };
}

/** Columns for which the standard has no key; they go by the words of whatever key a log uses. */
const byWords = [
  'quantity',
  'family',
  'due',
  'priority',
  'workContent',
  'value',
  'status',
] as const;

function namedByWords(
  profiles: readonly ColumnProfile[],
  reasons: GuessReason[],
): Partial<Record<(typeof byWords)[number], string>> {
  const found: Partial<Record<(typeof byWords)[number], string>> = {};
  const isNamed = (column: (typeof byWords)[number], profile: ColumnProfile): boolean => {
    // The first word says whether the trace or the event has the attribute.
    const score = wordScore(column, profile.words.slice(1));
    return score >= wholeHeaderScore && profile.filled > 0 && mayHold(profile, column, score);
  };
  for (const column of byWords) {
    const profile = profiles.find((each) => isNamed(column, each));
    if (!profile) continue;
    found[column] = profile.header;
    reasons.push({ about: column, reason: `“${profile.header}” is a common key for it.` });
  }
  return found;
}

function findKeys(
  profiles: readonly ColumnProfile[],
  reasons: GuessReason[],
): Partial<Record<XesColumn, ColumnProfile>> {
  const found: Partial<Record<XesColumn, ColumnProfile>> = {};
  for (const column of Object.keys(keys) as XesColumn[]) {
    const profile = keys[column]
      .map((key) => profiles.find(({ header, filled }) => header === key && filled > 0))
      .find((each) => each !== undefined);
    if (!profile || (column === 'record' && profile.distinctShare < 1)) continue;
    found[column] = profile;
    if (column !== 'time' || found.event) {
      reasons.push({ about: column, reason: `“${profile.header}” ${why[column]}.` });
      continue;
    }
    reasons.push({
      about: 'finished',
      reason: `No event says where it stands in a life cycle (lifecycle:transition), so each tells that an activity was finished: “${profile.header}” is the finish.`,
    });
  }
  return found;
}

/** Words of the standard, and those of other life cycles that the log uses and that are commonly known. */
function wordsOf({ cells }: ColumnProfile): EventWords {
  const standard = new Set(Object.values(lifeCycle).flat());
  const others = cells.filter((cell) => !standard.has(cell.trim().toLowerCase()));
  const guessed = guessEventWords(others.filter((cell) => commonEventMeaning(cell) !== null));
  const kinds = new Set([...Object.keys(lifeCycle), ...Object.keys(guessed)] as EventKind[]);
  return Object.fromEntries(
    [...kinds].map((kind) => [kind, [...(lifeCycle[kind] ?? []), ...(guessed[kind] ?? [])]]),
  );
}
