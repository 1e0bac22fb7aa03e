import { describe, expect, it } from 'vitest';
import {
  formatBytes,
  formatCount,
  formatDay,
  formatDuration,
  formatMoment,
  formatNumber,
  formatPerDay,
  formatPeriod,
  formatShare,
  inUnit,
  listed,
  plural,
  unknown,
} from '../../src/lib/format.ts';

describe('a length of time', () => {
  it.each([
    [0, '0 s'],
    [42, '42 s'],
    [1.5, '1.5 s'],
    [60, '1 min'],
    [42 * 60, '42 min'],
    [5.9 * 3600, '5.9 h'],
    [1.1 * 86_400, '26.4 h'],
    [2.5 * 86_400, '2.5 d'],
    [400 * 86_400, '400.0 d'],
    [null, unknown],
  ])('of %s seconds is %s', (seconds, words) => {
    expect(formatDuration(seconds)).toBe(words);
  });
});

describe('figures', () => {
  it('that are not known are a dash', () => {
    expect([
      formatCount(null),
      formatNumber(null, 1),
      formatPerDay(null),
      formatShare(null),
    ]).toEqual(Array(4).fill(unknown));
  });

  it('that round to zero have no sign', () => {
    expect(formatNumber(-1e-15, 1)).toBe('0.0');
  });

  it('have their unit', () => {
    expect(formatShare(0.931)).toBe('93 %');
    expect(formatPerDay(2)).toBe('48.0');
    expect(formatBytes(999)).toBe('999 B');
    expect(formatBytes(1_200_000)).toBe('1.2 MB');
    expect(inUnit(1, 'jobs')).toBe('1 job');
    expect(inUnit(2, 'units')).toBe('2 units');
    expect(plural(1, 'upload')).toBe('1 upload');
    expect(listed(['a', 'b', 'c'])).toBe('a, b and c');
  });
});

describe('days and moments', () => {
  it("stand in the site's zone, whatever the machine's", () => {
    expect(formatDay('2026-08-02T23:30:00Z', 'Europe/Dublin')).toBe('3 Aug 2026');
    expect(formatMoment('2026-08-02T23:30:00Z', 'America/New_York')).toBe('2 Aug 2026, 19:30');
  });

  it('a period is told by its first and last day', () => {
    const period = (from: string, to: string) => formatPeriod(from, to, 'UTC');
    expect(period('2026-11-02T00:00Z', '2026-11-30T00:00Z')).toBe('2 to 29 Nov 2026');
    expect(period('2026-10-26T00:00Z', '2026-11-30T00:00Z')).toBe('26 Oct to 29 Nov 2026');
    expect(period('2025-12-29T00:00Z', '2026-01-05T00:00Z')).toBe('29 Dec 2025 to 4 Jan 2026');
    expect(period('2026-11-02T00:00Z', '2026-11-03T00:00Z')).toBe('2 Nov 2026');
  });
});
