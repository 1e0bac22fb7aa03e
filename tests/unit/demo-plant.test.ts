import { readFileSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { plantExports } from '../../server/demo/plant/exports.ts';
import {
  agreedCap,
  areas,
  calibrationRests,
  chamberSlots,
  lostWeek,
  slowBench,
  span,
} from '../../server/demo/plant/plan.ts';
import { simulatePlant, type Visit } from '../../server/demo/plant/simulate.ts';

const visits = simulatePlant();
const day = 86_400_000;
const week = 7 * day;
const at = (...names: string[]) => visits.filter((visit) => names.includes(visit.area));

/** Mean number inside over each whole week, from the visits themselves. */
function weeklyMeans(inside: readonly Visit[]): number[] {
  const means = [];
  for (let from = span.from; from + week <= span.until + day; from += week)
    means.push(
      inside.reduce((sum, { arrived, finished }) => {
        const overlap = Math.min(from + week, finished ?? Infinity) - Math.max(from, arrived);
        return sum + Math.max(0, overlap);
      }, 0) / week,
    );
  return means;
}

/** The level after each moment at which it changes, changes of one moment together. */
function levels(inside: readonly Visit[]): { at: number; level: number }[] {
  const changes = new Map<number, number>();
  const add = (moment: number, step: number) =>
    changes.set(moment, (changes.get(moment) ?? 0) + step);
  for (const { arrived, finished } of inside) {
    add(arrived, 1);
    if (finished !== null) add(finished, -1);
  }
  let level = 0;
  return [...changes]
    .sort(([one], [other]) => one - other)
    .map(([moment, step]) => ({ at: moment, level: (level += step) }));
}

const mean = (values: readonly number[]) =>
  values.reduce((sum, value) => sum + value, 0) / values.length;
const weekOf = (moment: number) => Math.floor((moment - span.from) / week);
const dayOf = (moment: number) => Math.floor((moment - span.from) / day);

describe('the exports of the demo plant', () => {
  it.each(plantExports())('$fileName is what the generator writes', ({ fileName, text }) => {
    const written = readFileSync(new URL(`../../samples/${fileName}`, import.meta.url), 'utf8');
    expect(written === text).toBe(true);
  });

  it('tell of about nine thousand jobs over 26 weeks', () => {
    const jobs = new Set(
      visits.filter(({ arrived }) => arrived >= span.from).map(({ job }) => job),
    );
    expect(jobs.size).toBeGreaterThan(8800);
    expect(jobs.size).toBeLessThan(9300);
    expect(weeklyMeans(visits)).toHaveLength(26);
  });
});

/** How many of the moments lie in a day, before and after the bench grew slow. */
function perDay(moments: readonly (number | null)[]): { before: number; after: number } {
  const within = (from: number, until: number) =>
    moments.filter((moment) => moment !== null && moment >= from && moment < until).length /
    ((until - from) / day);
  return { before: within(span.from, slowBench.from), after: within(slowBench.from, span.until) };
}

describe('the demo plant', () => {
  it('has a repair bench that is steady and then rises week by week, because fewer leave', () => {
    const bench = at('Repair bench');
    const weekly = weeklyMeans(bench);
    const before = weekly.slice(0, weekOf(slowBench.from));
    const after = weekly.slice(weekOf(slowBench.from));
    for (const value of before) expect(Math.abs(value / mean(before) - 1)).toBeLessThan(0.1);
    for (const [index, value] of after.entries())
      if (index > 0) expect(value).toBeGreaterThan(after[index - 1] ?? Infinity);
    expect((after.at(-1) ?? 0) - mean(before)).toBeGreaterThan(120);
    const came = perDay(bench.map(({ arrived }) => arrived));
    const left = perDay(bench.map(({ finished }) => finished));
    expect(Math.abs(came.after - came.before)).toBeLessThan(0.2);
    expect(left.before - left.after).toBeGreaterThan(1);
    expect(left.before - left.after).toBeLessThan(1.6);
  });

  it('never holds more in Burn-in than there are chamber slots, and often as many', () => {
    const reached = levels(at('Burn-in'));
    expect(Math.max(...reached.map(({ level }) => level))).toBe(chamberSlots);
    const full = new Set(
      reached.filter(({ level }) => level === chamberSlots).map((each) => dayOf(each.at)),
    );
    expect([...full].filter((each) => each < dayOf(slowBench.from)).length).toBeGreaterThan(50);
    expect([...full].filter((each) => each >= dayOf(slowBench.from)).length).toBeGreaterThan(100);
  });

  it('has few jobs that wait for a chamber slot, and not more and more', () => {
    const leftBench = new Map(at('Repair bench').map((visit) => [visit.job, visit.finished]));
    const outside = at('Burn-in').map((visit) => ({
      ...visit,
      arrived: leftBench.get(visit.job) ?? visit.arrived,
      finished: visit.arrived,
    }));
    const weekly = weeklyMeans(outside);
    expect(Math.max(...weekly)).toBeLessThan(8);
    expect(mean(weekly.slice(-8))).toBeLessThan(mean(weekly.slice(0, 8)));
    expect(Math.max(...levels(outside).map(({ level }) => level))).toBeGreaterThan(3);
  });

  it('overruns the agreed cap nine times, for hours, when calibration rested, and at no other time', () => {
    const reached = levels(at(...agreedCap.areas));
    const episodes = calibrationRests.map(({ from, until }) =>
      reached.filter((each) => each.at >= from && each.at < until + day),
    );
    expect(episodes).toHaveLength(9);
    for (const episode of episodes) {
      const over = episode.filter(({ level }) => level > agreedCap.limit);
      expect(over.length).toBeGreaterThan(0);
      const [first, last] = [over[0]?.at ?? 0, over.at(-1)?.at ?? Infinity];
      expect(last - first).toBeLessThan(day / 2);
    }
    const inEpisodes = new Set(episodes.flat());
    const others = reached.filter((each) => !inEpisodes.has(each));
    expect(Math.max(...others.map(({ level }) => level))).toBeLessThanOrEqual(agreedCap.limit);
  });

  it('lost finishes at Dispatch in one week, which no export tells, and no others', () => {
    const told = new Map<string, string>();
    for (const { text } of plantExports())
      for (const row of text.trimEnd().split('\n').slice(1)) {
        const [job, area, arrived, , end = ''] = row.split(',');
        told.set([job, area, arrived].join(), end);
      }
    // Nothing else has been open for as long as two weeks on the last day.
    const open = [...told].filter(
      ([stay, end]) => end === '' && Date.parse(stay.split(',')[2] ?? '') < span.until - 14 * day,
    );
    const lost = visits.filter(({ finished }) => finished === null);
    expect(open.map(([stay]) => stay.split(',').slice(0, 2)).sort()).toEqual(
      lost.map(({ job }) => [job, 'Dispatch']).sort(),
    );
    expect(lost.length).toBeGreaterThanOrEqual(12);
    expect(lost.length).toBeLessThanOrEqual(16);
    for (const { started } of lost) {
      expect(started).toBeGreaterThan(lostWeek.from - day / 4);
      expect(started).toBeLessThan(lostWeek.until);
    }
  });

  it.each(areas.map(({ name }) => name).filter((name) => name !== 'Repair bench'))(
    'is steady at %s, but for what was lost, in every week since the bench grew slow',
    (name) => {
      const weekly = weeklyMeans(at(name).filter(({ finished }) => finished !== null));
      const usual = mean(weekly.slice(0, weekOf(slowBench.from)));
      for (const value of weekly.slice(weekOf(slowBench.from)))
        expect(Math.abs(value - usual)).toBeLessThan(0.2 * usual);
    },
  );

  it('rises as a whole by no more than gathers at the bench', () => {
    const weekly = weeklyMeans(
      visits.filter(({ area, finished }) => area !== 'Repair bench' && finished !== null),
    );
    const [early, late] = [mean(weekly.slice(0, 8)), mean(weekly.slice(-8))];
    expect(Math.abs(late - early)).toBeLessThan(0.05 * early);
  });
});
