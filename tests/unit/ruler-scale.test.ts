import { describe, expect, it } from 'vitest';
import { zoneRules } from '../../shared/local-time.ts';
import {
  momentOn,
  nearest,
  placeOn,
  rulerLabels,
  rulerTicks,
} from '../../src/charts/ruler-scale.ts';

const dublin = zoneRules('Europe/Dublin');
const scaleOf = (from: string, to: string, width: number) => ({
  from: Date.parse(from),
  to: Date.parse(to),
  width,
});

describe('a scale of time', () => {
  const scale = { from: 1000, to: 2000, width: 200 };

  it('places moments, and finds them again', () => {
    expect(placeOn(scale, 1250)).toBe(50);
    expect(momentOn(scale, 50)).toBe(1250);
    expect(placeOn(scale, 9000)).toBe(200);
    expect(momentOn(scale, -5)).toBe(1000);
  });

  it('finds the nearest border', () => {
    expect(nearest([0, 10, 20], 14)).toBe(10);
    expect(nearest([0, 10, 20], 16)).toBe(20);
    expect(nearest([0, 10, 20], -4)).toBe(0);
    expect(nearest([0, 10, 20], 99)).toBe(20);
  });
});

describe('the ruler of half a year', () => {
  const scale = scaleOf('2026-05-31T23:00:00Z', '2026-11-30T00:00:00Z', 1100);

  it('names each month where it begins', () => {
    expect(rulerLabels(scale, dublin).map(({ text }) => text)).toEqual([
      'Jun 2026',
      'Jul',
      'Aug',
      'Sep',
      'Oct',
      'Nov',
    ]);
  });

  it('has a tick for each day, a longer one for each Monday', () => {
    const ticks = rulerTicks(scale, dublin);
    expect(ticks.filter(({ long }) => long)).toHaveLength(27);
    expect(ticks).toHaveLength(183);
  });
});

describe('the ruler of three years', () => {
  const scale = scaleOf('2024-01-15T00:00:00Z', '2027-01-15T00:00:00Z', 700);

  it('leaves out what would crowd', () => {
    const ticks = rulerTicks(scale, dublin);
    expect(ticks.every(({ long }) => long)).toBe(true);
    const labels = rulerLabels(scale, dublin);
    expect(labels.map(({ text }) => text)).toEqual(
      expect.arrayContaining(['Jan 2025', 'Jan 2026']),
    );
    const places = labels.map(({ x }) => x);
    for (const [index, x] of places.entries())
      if (index > 0) expect(x - (places[index - 1] ?? 0)).toBeGreaterThan(40);
  });
});
