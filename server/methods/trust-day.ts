import { trustRank, worstGrade, type TrustGrade } from '../../shared/trust.ts';
import type { PostingDelay } from './posting-delay.ts';
import type { DayTimes, Grain } from './time-grain.ts';

/** What was found out about one area on one local day. */
export interface DayFacts {
  weekday: number;
  /** Recorded times of the area on the day, and how many are usual. */
  times: number;
  usual: number | null;
  isFew: boolean;
  /** The day lies in a long stretch in which next to nothing was recorded anywhere. */
  inLongRest: boolean;
  /** Whether any upload's span reaches into the day; and whether the area's data end within it. */
  isSpoken: boolean;
  isLastDay: boolean;
  /** Days from this one to the day in which the area's data end. */
  daysBeforeEnd: number;
  delay: PostingDelay | null;
  uploads: number;
  /** How long jobs wait for a start, where starts of jobs that came on the day may be outstanding. */
  waitingSeconds: number | null;
  /** The times by which the grain was judged: of the day alone, or together with the days about it. */
  timesForGrain: DayTimes;
  isGrainOfDay: boolean;
  grain: Grain | null;
  /** Stays that left on the day, those whose finish was inferred, those that tell neither arrival nor start. */
  left: number;
  inferred: number;
  untold: number;
}

export interface TrustReason {
  grade: TrustGrade;
  text: string;
}

/** The worst of what was found, with every reason, worst first. No reason: covered. */
export function gradeDay(facts: DayFacts): { grade: TrustGrade; reasons: TrustReason[] } {
  const reasons = [
    ...missing(facts),
    ...(facts.isSpoken ? [...inferred(facts), ...coarse(facts), ...settling(facts)] : []),
  ].sort((one, other) => trustRank(other.grade) - trustRank(one.grade));
  return { grade: worstGrade(reasons.map((reason) => reason.grade)), reasons };
}

const weekdays = [
  'Sunday',
  'Monday',
  'Tuesday',
  'Wednesday',
  'Thursday',
  'Friday',
  'Saturday',
] as const;

function missing({ isSpoken, inLongRest, isFew, times, usual, weekday }: DayFacts): TrustReason[] {
  const because = (text: string): TrustReason[] => [{ grade: 'missing', text }];
  if (!isSpoken) return because('No upload speaks for this area on this day.');
  if (inLongRest)
    return because(
      'Next to nothing was recorded anywhere for several working days: the site was closed, or an export is missing.',
    );
  if (!isFew || usual === null) return [];
  const seen =
    times === 0
      ? 'Nothing was recorded here'
      : `Only ${counted(times, 'start or finish was', 'starts and finishes were')} recorded here`;
  return because(
    `${seen}, where ${count(usual)} starts and finishes are usual on a ${weekdays[weekday] ?? 'day'}, and other areas went on.`,
  );
}

/** So large a share of a day's stays, and so many, are more than a slip here and there. */
const inferredShare = 0.2;
const leastInferred = 3;

function inferred({ left, inferred: taken, untold }: DayFacts): TrustReason[] {
  const isLarge = (part: number) => part >= leastInferred && part >= inferredShare * left;
  const of = (part: number) => `${count(part)} of ${counted(left, 'stay', 'stays')}`;
  return [
    ...(isLarge(taken)
      ? [`The finish of ${of(taken)} was not recorded, and is taken from the job’s next start.`]
      : []),
    ...(isLarge(untold)
      ? [
          `Neither arrival nor start of ${of(untold)} was recorded: when they came is taken from the finish before.`,
        ]
      : []),
  ].map((text) => ({ grade: 'inferred', text }));
}

function coarse({ grain, timesForGrain, isGrainOfDay }: DayFacts): TrustReason[] {
  if (grain === null) return [];
  const { finishes, onHours, onMinutes, clumped, clumps } = timesForGrain;
  const about = isGrainOfDay ? '' : ' of this week';
  const of = (part: number) => `${count(part)} of ${count(finishes)} finishes${about}`;
  const text = {
    clumps: `${of(clumped)} carry ${clumps === 1 ? 'one and the same moment' : `only ${clumps} moments`}, as where a shift posts its work at its end, or only dates are told.`,
    hours: `${of(onHours)} are told in whole hours, and most of this work takes less than two.`,
    minutes: `${of(onMinutes)} are told in whole minutes, and most of this work takes less than two.`,
  }[grain];
  return [{ grade: 'coarse', text }];
}

function settling(facts: DayFacts): TrustReason[] {
  const { isLastDay, daysBeforeEnd, delay, waitingSeconds } = facts;
  return [
    ...(isLastDay ? [`The data end within this day.${learnt(facts)}`] : []),
    ...(!isLastDay && delay && daysBeforeEnd < delay.settledAfterDays
      ? [stillPosted(daysBeforeEnd, delay)]
      : []),
    ...(waitingSeconds !== null
      ? [
          `Arrivals are not recorded here but taken from starts, and jobs wait up to ${hours(waitingSeconds)}: some that came on this day may not have started yet.`,
        ]
      : []),
  ].map((text) => ({ grade: 'settling', text }));
}

function stillPosted(daysBeforeEnd: number, { shares, uploads }: PostingDelay): string {
  const share = shares[daysBeforeEnd] ?? null;
  const seen = `as ${counted(uploads, 'earlier upload shows', 'earlier uploads show')}`;
  const after = counted(daysBeforeEnd, 'day', 'days');
  return share === null
    ? `Finishes are still being posted ${after} later, ${seen}.`
    : `Finishes are still being posted: after ${after} ${Math.floor(share * 100)} % of them were there, ${seen}.`;
}

function learnt({ delay, uploads }: DayFacts): string {
  if (delay) return '';
  return uploads <= 1
    ? ' How late finishes are posted cannot be learnt from one upload.'
    : ' How late finishes are posted could not be learnt: later uploads do not tell of earlier days again.';
}

const hours = (seconds: number): string =>
  seconds < 48 * 3600 ? `${count(seconds / 3600)} h` : `${count(seconds / 86_400)} d`;
const count = (value: number): string => String(Math.round(value * 10) / 10);
const counted = (value: number, one: string, many: string): string =>
  `${count(value)} ${value === 1 ? one : many}`;
