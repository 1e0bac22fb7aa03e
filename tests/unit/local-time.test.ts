import { describe, expect, it } from 'vitest';
import {
  hourEnd,
  hourStart,
  hourStretches,
  isTimeZone,
  localDay,
  offsetAt,
  readLocal,
  stepBorders,
  zoneRules,
} from '../../shared/local-time.ts';

const at = (text: string) => Date.parse(text);
const hours = (borders: readonly number[]) =>
  borders.slice(1).map((border, index) => (border - (borders[index] ?? 0)) / 3_600_000);

describe('a local day', () => {
  // Clock changes as published in the IANA time zone database.
  it.each([
    ['Europe/Dublin', '2026-03-28T12:00Z', '2026-03-30T12:00Z', [24, 23, 24]],
    ['Europe/Dublin', '2026-10-24T12:00Z', '2026-10-26T12:00Z', [24, 25, 24]],
    ['Australia/Lord_Howe', '2026-04-04T12:00Z', '2026-04-05T12:00Z', [24, 24.5]],
    ['Australia/Lord_Howe', '2026-10-03T12:00Z', '2026-10-04T12:00Z', [24, 23.5]],
    ['Asia/Kathmandu', '1985-12-31T12:00Z', '1986-01-01T12:00Z', [24, 23.75]],
    ['America/Sao_Paulo', '2018-11-03T12:00Z', '2018-11-05T12:00Z', [24, 23, 24]],
  ])('in %s from %s has its true length', (timeZone, from, to, lengths) => {
    expect(hours(stepBorders(zoneRules(timeZone), 'day', at(from), at(to)))).toEqual(lengths);
  });

  it('that lacks its midnight begins with the change', () => {
    const rules = zoneRules('America/Sao_Paulo');
    const borders = stepBorders(rules, 'day', at('2018-11-04T12:00Z'), at('2018-11-04T13:00Z'));
    expect(new Date(borders[0] ?? 0).toISOString()).toBe('2018-11-04T03:00:00.000Z');
    expect(localDay(rules, borders[0] ?? 0)).toBe('2018-11-04');
  });

  it('in a zone off by three quarters of an hour begins at its own midnight', () => {
    const [first] = stepBorders(
      zoneRules('Pacific/Chatham'),
      'day',
      at('2026-06-10T00:00Z'),
      at('2026-06-10T01:00Z'),
    );
    expect(new Date(first ?? 0).toISOString()).toBe('2026-06-09T11:15:00.000Z');
  });
});

describe('an ISO week', () => {
  it('begins on Monday, also before 1970', () => {
    const [start] = stepBorders(
      zoneRules('Europe/London'),
      'week',
      at('1967-09-13T00:00Z'),
      at('1967-09-13T01:00Z'),
    );
    expect(localDay(zoneRules('Europe/London'), start ?? 0)).toBe('1967-09-11');
  });
});

describe('local hours', () => {
  it('divide a day of 25 hours into 25', () => {
    const rules = zoneRules('Europe/Dublin');
    const [from = 0, to = 0] = stepBorders(
      rules,
      'day',
      at('2026-10-25T12:00Z'),
      at('2026-10-25T13:00Z'),
    );
    expect(hours(stepBorders(rules, 'hour', from, to))).toEqual(Array(25).fill(1));
  });

  it('last 30 and 90 minutes where the clock moves by half an hour', () => {
    const rules = zoneRules('Australia/Lord_Howe');
    const back = stepBorders(rules, 'hour', at('2026-04-04T13:00Z'), at('2026-04-04T18:00Z'));
    expect(hours(back)).toContain(1.5);
    const forward = stepBorders(rules, 'hour', at('2026-10-03T13:00Z'), at('2026-10-03T18:00Z'));
    expect(hours(forward)).toContain(0.5);
  });

  it('cover time without gap or overlap', () => {
    const rules = zoneRules('Australia/Lord_Howe');
    const span = { from: at('2026-04-04T12:00Z'), to: at('2026-04-05T00:00Z') };
    const stretches = hourStretches(rules, span.from, span.to);
    for (let moment = span.from; moment < span.to; moment += 7 * 60_000) {
      const start = hourStart(stretches, moment);
      expect(start).toBeLessThanOrEqual(moment);
      expect(hourEnd(stretches, start)).toBeGreaterThan(moment);
      expect(hourStart(stretches, hourEnd(stretches, start))).toBe(hourEnd(stretches, start));
    }
  });
});

describe('a local time without an offset', () => {
  // RFC 5545, section 3.3.5: the first of two; one that does not occur, with the offset before the gap.
  it('that occurs twice means its first occurrence', () => {
    const reading = readLocal(zoneRules('Europe/Dublin'), Date.UTC(2026, 9, 25, 1, 30));
    expect(reading).toEqual({
      at: at('2026-10-25T00:30Z'),
      second: at('2026-10-25T01:30Z'),
      skipped: false,
    });
  });

  it('that does not occur is read with the offset before the gap', () => {
    const reading = readLocal(zoneRules('Europe/Dublin'), Date.UTC(2026, 2, 29, 1, 30));
    expect(reading).toEqual({ at: at('2026-03-29T01:30Z'), second: null, skipped: true });
  });

  it('that occurs once is that', () => {
    expect(readLocal(zoneRules('America/New_York'), Date.UTC(1967, 0, 1, 12))).toEqual({
      at: at('1967-01-01T17:00Z'),
      second: null,
      skipped: false,
    });
  });
});

describe('a zone', () => {
  it('is known by its name or not at all', () => {
    expect(isTimeZone('Europe/Dublin')).toBe(true);
    expect(isTimeZone('Europe/Nowhere')).toBe(false);
  });

  it('has its offsets to the second', () => {
    // Liberia kept 44 minutes and 30 seconds behind until 7 January 1972 (IANA time zone database).
    const rules = zoneRules('Africa/Monrovia');
    expect(offsetAt(rules, at('1971-01-01T00:00Z'))).toBe(-(44 * 60 + 30) * 1000);
    expect(offsetAt(rules, at('1973-01-01T00:00Z'))).toBe(0);
  });
});
