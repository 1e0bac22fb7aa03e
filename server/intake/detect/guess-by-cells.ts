import { holdsTimes, mostly, type ColumnProfile } from './column-profile.ts';
import { isTaken, type FoundColumns, type GuessReason } from './found-columns.ts';
import { isOnly } from './guess-by-words.ts';

/** Finds the job by its cells, where no header names it. */
export function guessJob(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): void {
  if (found.job) return;
  const [job] = freeText(profiles, found)
    .filter(({ distinct, distinctShare }) => distinct > 1 && distinctShare >= 0.2)
    .sort((a, b) => b.distinctShare - a.distinctShare || a.place - b.place);
  if (!job) return;
  found.job = job;
  const reason = `“${job.header}” differs from row to row more than any other column, as job keys do.`;
  reasons.push({ about: 'job', reason });
}

/** Finds the area by its cells, where no header names it. */
export function guessArea(
  profiles: readonly ColumnProfile[],
  found: FoundColumns,
  reasons: GuessReason[],
): void {
  if (found.area) return;
  const [area] = freeText(profiles, found)
    .filter(({ distinct, numberShare }) => distinct > 1 && distinct <= 200 && numberShare < mostly)
    .filter(({ distinctShare }) => distinctShare <= 0.5)
    .sort((a, b) => a.distinctShare - b.distinctShare || a.place - b.place);
  if (!area) return;
  found.area = area;
  const reason = `“${area.header}” holds ${area.distinct} names that come again and again, as areas do.`;
  reasons.push({ about: 'area', reason });
}

const freeText = (profiles: readonly ColumnProfile[], found: FoundColumns): ColumnProfile[] =>
  profiles.filter(
    (profile) =>
      profile.header !== '' &&
      profile.filled > 0 &&
      !holdsTimes(profile) &&
      !isTaken(found, profile) &&
      isOnly(profile, profiles),
  );
