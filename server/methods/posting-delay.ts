/** Finishes of one area on one day, by the first upload that told them as they now stand. */
export interface PostedFinishes {
  /** Place of the day in the grid. */
  day: number;
  uploadId: number;
  finishes: number;
}

/** From which day an upload tells of the area, and the day in which it ends. Ids grow in order of receipt. */
export interface SpokenDays {
  uploadId: number;
  firstDay: number;
  lastDay: number;
}

export interface PostingDelay {
  /** From so many days before an upload's end on, a day's finishes are all there. */
  settledAfterDays: number;
  /** By days before the end, the share of the finishes known now that were there then. */
  shares: (number | null)[];
  /** How many uploads taught it. */
  uploads: number;
}

const mostUploads = 12;
const reachDays = 28;
/** A day is settled with so large a share of its finishes. */
const settledShare = 0.98;
const leastFinishes = 20;

/**
 * How late an area's finishes are posted, learnt from how earlier days filled up: for each earlier upload,
 * how many of the finishes of the day that lies k days before its end were already there, against those that
 * are there now, over the latest twelve such uploads together. A day counts only where a later upload tells
 * of it again, since otherwise nothing could have been added. Null where too little can be compared.
 *
 * The day in which an upload ends (k = 0) is a part-day, and no measure: a part of its finishes had not
 * happened yet.
 *
 * @param spoken in order of receipt
 */
export function learnPostingDelay(
  posted: readonly PostedFinishes[],
  spoken: readonly SpokenDays[],
): PostingDelay | null {
  const byDay = groupByDay(posted);
  const there = Array.from({ length: reachDays }, () => 0);
  const now = Array.from({ length: reachDays }, () => 0);
  const teachers = new Set<number>();
  for (const upload of spoken.slice(0, -1).slice(-mostUploads)) {
    const later = spoken.filter((each) => each.uploadId > upload.uploadId);
    for (let back = 1; back < reachDays; back++) {
      const day = upload.lastDay - back;
      if (!later.some((each) => each.firstDay <= day && each.lastDay >= day)) continue;
      const finishes = byDay.get(day) ?? [];
      now[back] = (now[back] ?? 0) + sum(finishes);
      there[back] =
        (there[back] ?? 0) + sum(finishes.filter((each) => each.uploadId <= upload.uploadId));
      if (finishes.length > 0) teachers.add(upload.uploadId);
    }
  }
  if (now.reduce((total, count) => total + count, 0) < leastFinishes) return null;
  const shares = now.map((count, back) => (count === 0 ? null : (there[back] ?? 0) / count));
  const lastUnsettled = shares.findLastIndex((share) => share !== null && share < settledShare);
  return { settledAfterDays: Math.max(1, lastUnsettled + 1), shares, uploads: teachers.size };
}

const sum = (finishes: readonly PostedFinishes[]) =>
  finishes.reduce((total, each) => total + each.finishes, 0);

function groupByDay(posted: readonly PostedFinishes[]): Map<number, PostedFinishes[]> {
  const byDay = new Map<number, PostedFinishes[]>();
  for (const each of posted) {
    const ofDay = byDay.get(each.day);
    if (ofDay) ofDay.push(each);
    else byDay.set(each.day, [each]);
  }
  return byDay;
}
