import { describe, expect, it } from 'vitest';
import { clockOffsets, type AreaGaps } from '../../server/methods/clock-offset.ts';
import { holdsOnlyFinished, type PaceAtEnd } from '../../server/methods/finish-filter.ts';
import { learnPostingDelay } from '../../server/methods/posting-delay.ts';
import { noTimes, timeGrain } from '../../server/methods/time-grain.ts';
import { gradeDay, type DayFacts } from '../../server/methods/trust-day.ts';
import {
  isImplausibleSilence,
  longRests,
  poissonAtMost,
  unusuallyFew,
  type CountedDay,
} from '../../server/methods/unusually-few.ts';
import { worstGrade } from '../../shared/trust.ts';

/** Consecutive days from a Monday on. */
const daysOf = (counts: readonly number[]): CountedDay[] =>
  counts.map((count, index) => ({ weekday: (index + 1) % 7, count, leftOut: false }));
const week = [20, 20, 20, 20, 20, 0, 0];
const weeks = (count: number) => Array.from({ length: count }, () => week).flat();
const fewOf = (counts: readonly number[]) =>
  unusuallyFew(daysOf(counts)).flatMap((verdict, index) => (verdict.isFew ? [index] : []));

describe('unusually few', () => {
  it('knows what a Poisson count of mean 2 gives at most once: 3 e⁻²', () => {
    expect(poissonAtMost(1, 2)).toBeCloseTo(3 * Math.exp(-2), 12);
    expect(poissonAtMost(0, 20)).toBeCloseTo(Math.exp(-20), 20);
  });

  it('finds a silent working day after four weeks of such days, and no rest at the weekend', () => {
    expect(fewOf([...weeks(4), 20, 0, 20, 20, 20, 0, 0])).toEqual([29]);
    expect(fewOf(weeks(9))).toEqual([]);
  });

  it('says nothing before it knows four days of the weekday', () => {
    expect(fewOf([...weeks(3), 0, 0, 0])).toEqual([]);
  });

  it('does not blame what comes in batches: every other week nothing', () => {
    const batches = Array.from({ length: 16 }, (_, index) => (index % 2 === 0 ? 40 : 0));
    expect(fewOf(batches.flatMap((count) => [count, 0, 0, 0, 0, 0, 0]))).toEqual([]);
  });

  it('does not blame a quiet day, nor a count that a small mean gives by chance', () => {
    expect(fewOf([...weeks(4), 8])).toEqual([]);
    const rare = Array.from({ length: 5 }, () => [4, 0, 0, 0, 0, 0, 0]).flat();
    expect(fewOf([...rare, 0])).toEqual([]);
  });

  it('keeps a hole of six weeks from becoming the custom', () => {
    const hole = Array.from({ length: 42 }, () => 0);
    expect(fewOf([...weeks(5), ...hole, ...week])).toHaveLength(30);
  });

  it('takes two working days of rest as a feast, three in a row as more, over a weekend too', () => {
    const long = (counts: readonly number[]) => {
      const days = daysOf(counts);
      return longRests(days, unusuallyFew(days)).flatMap((isLong, index) =>
        isLong ? [index] : [],
      );
    };
    expect(long([...weeks(4), 20, 20, 20, 0, 0, 0, 0, 20])).toEqual([]);
    expect(long([...weeks(4), 20, 20, 20, 0, 0, 0, 0, 0, 20])).toEqual([31, 32, 35]);
  });

  it('calls silence implausible from seven usual times on', () => {
    expect([6.5, 7].map(isImplausibleSilence)).toEqual([false, true]);
  });
});

describe('the delay of posting', () => {
  /** Upload 1 ends on day 10, upload 2 on day 20; of day 9 half was there, of day 8 nine in ten. */
  const posted = [
    { day: 9, uploadId: 1, finishes: 10 },
    { day: 9, uploadId: 2, finishes: 10 },
    { day: 8, uploadId: 1, finishes: 18 },
    { day: 8, uploadId: 2, finishes: 2 },
    { day: 7, uploadId: 1, finishes: 20 },
  ];
  const first = { uploadId: 1, firstDay: 0, lastDay: 10 };

  it('is learnt from how days filled up after an earlier upload', () => {
    const delay = learnPostingDelay(posted, [first, { uploadId: 2, firstDay: 5, lastDay: 20 }]);
    expect(delay).toMatchObject({ settledAfterDays: 3, uploads: 1 });
    expect(delay?.shares.slice(0, 4)).toEqual([null, 0.5, 0.9, 1]);
  });

  it('is one day, the part-day, where all was there', () => {
    const whole = [{ day: 9, uploadId: 1, finishes: 30 }];
    const delay = learnPostingDelay(whole, [first, { uploadId: 2, firstDay: 5, lastDay: 20 }]);
    expect(delay?.settledAfterDays).toBe(1);
  });

  it('cannot be learnt from one upload, nor from one that does not tell of those days again', () => {
    expect(learnPostingDelay(posted, [first])).toBeNull();
    expect(
      learnPostingDelay(posted, [first, { uploadId: 2, firstDay: 10, lastDay: 20 }]),
    ).toBeNull();
  });

  it('cannot be learnt from fewer than twenty finishes', () => {
    const few = [{ day: 9, uploadId: 1, finishes: 19 }];
    expect(learnPostingDelay(few, [first, { uploadId: 2, firstDay: 5, lastDay: 20 }])).toBeNull();
  });
});

describe('the grain of times', () => {
  const day = { ...noTimes, finishes: 20 };

  it('is coarse where three moments carry six finishes in ten', () => {
    expect(timeGrain({ ...day, clumped: 12, clumps: 3 })).toBe('clumps');
    expect(timeGrain({ ...day, clumped: 11, clumps: 3 })).toBeNull();
  });

  it('does no harm where work takes long: whole hours blur work of under two hours only', () => {
    const onHours = { ...day, onHours: 20, onMinutes: 20 };
    expect(timeGrain({ ...onHours, briefForHours: 11 })).toBe('hours');
    expect(timeGrain({ ...onHours, briefForHours: 10 })).toBeNull();
    expect(timeGrain({ ...day, onMinutes: 20, briefForMinutes: 11 })).toBe('minutes');
    expect(timeGrain({ ...day, onMinutes: 17, briefForMinutes: 17 })).toBeNull();
  });

  it('is not judged from nine finishes', () => {
    expect(timeGrain({ ...noTimes, finishes: 9, clumped: 9, clumps: 1 })).toBeNull();
  });
});

describe('clocks', () => {
  const gaps: AreaGaps = {
    beforeId: 1,
    afterId: 2,
    pairs: 100,
    negative: 60,
    q05: -720,
    q25: -690,
    q50: -600,
    q75: -480,
  };

  it('disagree where many gaps are negative by much the same', () => {
    expect(clockOffsets([gaps])).toEqual([
      { beforeId: 1, afterId: 2, seconds: 720, pairs: 100, negative: 60 },
    ]);
  });

  it.each([
    ['few gaps are negative', { negative: 29 }],
    ['there are few of them', { pairs: 30, negative: 19 }],
    ['they are of every length, as where work overlaps', { q05: -7200, q25: -3600, q75: -100 }],
    ['they are under a minute', { q05: -59, q25: -58, q50: -55, q75: -50 }],
  ])('are not blamed where %s', (_, change) => {
    expect(clockOffsets([{ ...gaps, ...change }])).toEqual([]);
  });
});

describe('an export of finished work only', () => {
  const pace: PaceAtEnd = {
    open: 0,
    insideBefore: 40,
    departures: 100,
    latestDepartures: 25,
    usualDepartures: [100, 110, 95, 105],
    usualLatestDepartures: [24, 26, 25, 25],
  };

  it('has nobody inside at its end though as many leave as ever', () => {
    expect(holdsOnlyFinished(pace)).toBe(true);
  });

  it.each([
    ['a job is open', { open: 1 }],
    ['few were inside', { insideBefore: 9 }],
    ['departures dwindle: the plant ran empty', { latestDepartures: 10 }],
    ['fewer left than ever over the whole stretch', { departures: 70 }],
    ['too little leaves to tell', { usualLatestDepartures: [9, 9, 9, 9], latestDepartures: 9 }],
  ])('is not suspected where %s', (_, change) => {
    expect(holdsOnlyFinished({ ...pace, ...change })).toBe(false);
  });
});

describe('the grade of a day', () => {
  const facts: DayFacts = {
    weekday: 1,
    times: 40,
    usual: 40,
    isFew: false,
    inLongRest: false,
    isSpoken: true,
    isLastDay: false,
    daysBeforeEnd: 10,
    delay: null,
    uploads: 1,
    waitingSeconds: null,
    timesForGrain: { ...noTimes, finishes: 20 },
    isGrainOfDay: true,
    grain: null,
    left: 20,
    inferred: 0,
    untold: 0,
  };
  const grade = (change: Partial<DayFacts>) => gradeDay({ ...facts, ...change });

  it('is covered where nothing speaks against it', () => {
    expect(grade({})).toEqual({ grade: 'covered', reasons: [] });
  });

  it('is the worst of all reasons, which are all kept, worst first', () => {
    const { grade: worst, reasons } = grade({ isFew: true, inferred: 5, isLastDay: true });
    expect(worst).toBe('missing');
    expect(reasons.map((reason) => reason.grade)).toEqual(['missing', 'inferred', 'settling']);
    expect(worstGrade([])).toBe('covered');
  });

  it('is inferred from one stay in five on, and three', () => {
    expect(grade({ inferred: 4 }).grade).toBe('inferred');
    expect(grade({ inferred: 3 }).grade).toBe('covered');
    expect(grade({ left: 2, inferred: 2 }).grade).toBe('covered');
    expect(grade({ untold: 20 }).reasons[0]?.text).toContain(
      'Neither arrival nor start of 20 of 20 stays',
    );
  });

  it('says that one upload does not teach how late finishes are posted', () => {
    expect(grade({ isLastDay: true, daysBeforeEnd: 0 }).reasons).toEqual([
      {
        grade: 'settling',
        text: 'The data end within this day. How late finishes are posted cannot be learnt from one upload.',
      },
    ]);
  });

  it('settles for as long as earlier uploads took, and says how far they had come', () => {
    const delay = { settledAfterDays: 3, shares: [null, 0.5, 0.912, 1], uploads: 2 };
    expect(grade({ delay, daysBeforeEnd: 3 }).grade).toBe('covered');
    expect(grade({ delay, daysBeforeEnd: 2 }).reasons[0]?.text).toBe(
      'Finishes are still being posted: after 2 days 91 % of them were there, as 2 earlier uploads show.',
    );
  });

  it('tells a day with nothing on it from one with next to nothing', () => {
    expect(grade({ isFew: true, times: 0 }).reasons[0]?.text).toBe(
      'Nothing was recorded here, where 40 starts and finishes are usual on a Monday, and other areas went on.',
    );
    expect(grade({ isFew: true, times: 1 }).reasons[0]?.text).toMatch(
      /^Only 1 start or finish was recorded/,
    );
  });

  it('of a day that no upload speaks for is missing, and nothing else is said of it', () => {
    expect(grade({ isSpoken: false, isLastDay: true, inferred: 9 }).reasons).toEqual([
      { grade: 'missing', text: 'No upload speaks for this area on this day.' },
    ]);
  });
});
