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

describe('the demo plant', () => {
  it('has a repair bench that is steady and then rises, because fewer leave', () => {
    const bench = at('Repair bench');
    const weekly = weeklyMeans(bench);
    const before = weekly.slice(0, weekOf(slowBench.from));
    const after = weekly.slice(weekOf(slowBench.from));
    expect(Math.max(...before)).toBeLessThan(2 * Math.min(...before));
    for (const [index, value] of after.entries())
      if (index > 0) expect(value).toBeGreaterThan(after[index - 1] ?? Infinity);
    expect((after.at(-1) ?? 0) - mean(before)).toBeGreaterThan(150);
    const weeks = (span.until - slowBench.from) / week;
    const counted = (of: (visit: Visit) => number | null) =>
      bench.filter((visit) => {
        const moment = of(visit);
        return moment !== null && moment >= slowBench.from && moment < span.until;
      }).length / weeks;
    const [came, left] = [counted((visit) => visit.arrived), counted((visit) => visit.finished)];
    expect(came - left).toBeGreaterThan(10);
  });

  it('never holds more in Burn-in than there are chamber slots, and often as many', () => {
    const reached = levels(at('Burn-in'));
    expect(Math.max(...reached.map(({ level }) => level))).toBe(chamberSlots);
    const full = new Set(
      reached.filter(({ level }) => level === chamberSlots).map((each) => dayOf(each.at)),
    );
    expect(full.size).toBeGreaterThan(100);
  });

  it('overruns the agreed cap of Calibration and Final check on days when calibration rested', () => {
    const over = levels(at(...agreedCap.areas)).filter(({ level }) => level > agreedCap.limit);
    const days = new Set(over.map((each) => dayOf(each.at)));
    expect(days.size).toBeGreaterThanOrEqual(6);
    for (const each of over)
      expect(
        calibrationRests.some(({ from, until }) => each.at >= from && each.at < until + 2 * day),
      ).toBe(true);
  });

  it('lost finishes at Dispatch in one week, and nowhere else', () => {
    const lost = visits.filter(({ finished }) => finished === null);
    expect(lost.length).toBeGreaterThanOrEqual(12);
    for (const visit of lost) {
      expect(visit.area).toBe('Dispatch');
      expect(visit.started).toBeGreaterThan(lostWeek.from - day);
      expect(visit.started).toBeLessThan(lostWeek.until);
    }
  });

  it.each(
    areas.map(({ name }) => name).filter((name) => !['Repair bench', 'Dispatch'].includes(name)),
  )('is steady at %s', (name) => {
    const weekly = weeklyMeans(at(name));
    const [early, late] = [mean(weekly.slice(0, 8)), mean(weekly.slice(-8))];
    expect(Math.abs(late - early)).toBeLessThan(Math.max(1, 0.25 * early));
  });

  it('is steady at Dispatch but for what is lost', () => {
    const weekly = weeklyMeans(at('Dispatch').filter(({ finished }) => finished !== null));
    expect(Math.abs(mean(weekly.slice(-8)) - mean(weekly.slice(0, 8)))).toBeLessThan(0.5);
  });
});
