import { parse as parseByDateFns } from 'date-fns';
import { tz } from '@date-fns/tz';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { AutoTimeReader } from '../../server/intake/times/auto-time-reader.ts';
import { dayExists, daysSince1970 } from '../../server/intake/times/calendar.ts';
import { LocalClock } from '../../server/intake/times/local-clock.ts';
import { PatternTimeReader } from '../../server/intake/times/pattern-time-reader.ts';
import { compileTimePattern } from '../../server/intake/times/time-pattern.ts';
import type { TimeReader } from '../../server/intake/times/time-reader.ts';
import { readLocal, zoneRules } from '../../shared/local-time.ts';

const readBy = (reader: TimeReader, text: string): string | null => {
  const bytes = Buffer.from(text);
  if (reader.read(bytes, 0, bytes.length) !== null) return null;
  const { micros } = reader;
  const whole = new Date(Math.floor(micros / 1000)).toISOString().slice(0, -1);
  const rest = String(((micros % 1000) + 1000) % 1000).padStart(3, '0');
  return `${whole}${rest}Z`;
};

const auto = (zone = 'UTC', order: 'day-first' | 'month-first' | null = null) =>
  new AutoTimeReader(new LocalClock(zoneRules(zone)), order);

describe('times read by their form', () => {
  // Sources: ISO 8601 forms by hand; epochs by `date -u -d @…`; serials: 25569 is 1970-01-01 (common practice).
  test.each([
    ['2025-03-01T08:15:00Z', 'iso-with-offset', '2025-03-01T08:15:00.000000Z'],
    ['2025-03-01T08:15:00+01:00', 'iso-with-offset', '2025-03-01T07:15:00.000000Z'],
    ['2025-03-01 08:15-0600', 'iso-with-offset', '2025-03-01T14:15:00.000000Z'],
    ['2025-03-01T08:15:00+05', 'iso-with-offset', '2025-03-01T03:15:00.000000Z'],
    ['2025-03-01 08:15:00 UTC', 'iso-with-offset', '2025-03-01T08:15:00.000000Z'],
    ['2025-03-01T08:15:00.1Z', 'iso-with-offset', '2025-03-01T08:15:00.100000Z'],
    ['2025-03-01T08:15:00,123456789Z', 'iso-with-offset', '2025-03-01T08:15:00.123456Z'],
    ['2025-03-01T08:15', 'iso-local', '2025-03-01T08:15:00.000000Z'],
    ['2025-03-01 8:15:09', 'iso-local', '2025-03-01T08:15:09.000000Z'],
    ['2025-03-01', 'iso-local', '2025-03-01T00:00:00.000000Z'],
    ['2025/3/1 08:15', 'iso-local', '2025-03-01T08:15:00.000000Z'],
    ['2025-12-31 24:00', 'iso-local', '2026-01-01T00:00:00.000000Z'],
    ['1967-09-13', 'iso-local', '1967-09-13T00:00:00.000000Z'],
    ['1969-12-31T23:59:59.999999Z', 'iso-with-offset', '1969-12-31T23:59:59.999999Z'],
    ['20250301', 'compact', '2025-03-01T00:00:00.000000Z'],
    ['20250301081530', 'compact', '2025-03-01T08:15:30.000000Z'],
    ['20250301T081530Z', 'iso-with-offset', '2025-03-01T08:15:30.000000Z'],
    ['45717', 'serial', '2025-03-01T00:00:00.000000Z'],
    ['45717.34375', 'serial', '2025-03-01T08:15:00.000000Z'],
    ['45717,34375', 'serial', '2025-03-01T08:15:00.000000Z'],
    ['45717.3437557', 'serial', '2025-03-01T08:15:00.000000Z'],
    ['25569', 'serial', '1970-01-01T00:00:00.000000Z'],
    ['1740816900', 'epoch-seconds', '2025-03-01T08:15:00.000000Z'],
    ['1740816900.25', 'epoch-seconds', '2025-03-01T08:15:00.250000Z'],
    ['1740816900123', 'epoch-milliseconds', '2025-03-01T08:15:00.123000Z'],
    ['-100000000', 'epoch-seconds', '1966-10-31T14:13:20.000000Z'],
    ['13.02.2025 08:15', 'day-and-month', '2025-02-13T08:15:00.000000Z'],
  ])('%s is %s', (text, form, expected) => {
    const reader = auto();
    expect(readBy(reader, text)).toBe(expected);
    expect(reader.form).toBe(form);
  });

  test.each([
    ['02/03/2025 8:15 PM', 'day-first', '2025-03-02T20:15:00.000000Z'],
    ['02/03/2025 8:15 PM', 'month-first', '2025-02-03T20:15:00.000000Z'],
    ['2-3-25 12:00 am', 'day-first', '2025-03-02T00:00:00.000000Z'],
    ['12/31/99 12:30 pm', 'month-first', '1999-12-31T12:30:00.000000Z'],
  ] as const)('%s read %s', (text, order, expected) => {
    expect(readBy(auto('UTC', order), text)).toBe(expected);
  });

  test.each([
    ['13/02/2025', 'month-first'],
    ['02/13/2025', 'day-first'],
    ['02/03/2025', null],
  ] as const)('%s contradicts the order %s', (text, order) => {
    const bytes = Buffer.from(text);
    expect(auto('UTC', order).read(bytes, 0, bytes.length)).toBe('other-date-order');
  });

  test.each([
    '31/02/2025',
    '2025-02-29',
    '2025-13-01',
    '0000-00-00 00:00:00',
    '2025-03-01T',
    '2025-03-01 25:00',
    '2025-03-01 24:01',
    '2025-03-01 08:60',
    '2025-03-01 08:15:60',
    '2025-03-01 08:15.5',
    '2025-03-01 08:15:00.',
    '2025-03-01 08:15 13',
    '2025-03-01 13:15 pm',
    '2025-03-01T08:15:00+19:00',
    '2025-03-01T08:15:00+5',
    '2025-3',
    '08:15',
    '4571',
    '457171',
    '45717.',
    '17408169001',
    '1e9',
    '-45717',
    'yesterday',
    'Z',
    '１２/02/2025',
  ])('%s is no time', (text) => {
    expect(readBy(auto('UTC', 'day-first'), text)).toBeNull();
  });

  test('of any moment are read back from ISO 8601 at any offset', () => {
    const reader = auto();
    fc.assert(
      fc.property(
        fc.integer({ min: Date.UTC(1950, 0, 1), max: Date.UTC(2099, 11, 31) }),
        fc.integer({ min: -14 * 60, max: 14 * 60 }),
        (at, offset) => {
          const shown = new Date(at + offset * 60_000).toISOString().slice(0, -1);
          const sign = offset < 0 ? '-' : '+';
          const hours = String(Math.floor(Math.abs(offset) / 60)).padStart(2, '0');
          const minutes = String(Math.abs(offset) % 60).padStart(2, '0');
          const text = Buffer.from(`${shown}${sign}${hours}:${minutes}`);
          expect(reader.read(text, 0, text.length)).toBeNull();
          expect(reader.micros).toBe(at * 1000);
        },
      ),
    );
  });
});

describe('days of the calendar', () => {
  test('agree with the runtime’s own over four centuries', () => {
    fc.assert(
      fc.property(fc.integer({ min: -150_000, max: 150_000 }), (day) => {
        const date = new Date(day * 86_400_000);
        const parts = [date.getUTCFullYear(), date.getUTCMonth() + 1, date.getUTCDate()] as const;
        expect(daysSince1970(...parts)).toBe(day);
        expect(dayExists(...parts)).toBe(true);
      }),
      { numRuns: 500 },
    );
  });
});

describe('local times', () => {
  // Source: the time-zone database. Lord Howe moves by half an hour, Chatham stands 45 minutes off the hour.
  test.each([
    ['Europe/Dublin', '2025-10-26 01:30', '2025-10-26T00:30', '2025-10-26T01:30', false],
    ['Europe/Dublin', '2025-03-30 01:30', '2025-03-30T01:30', null, true],
    ['Europe/Dublin', '1968-10-27 02:30', '1968-10-27T01:30', null, false],
    ['America/New_York', '2025-11-02 01:15', '2025-11-02T05:15', '2025-11-02T06:15', false],
    ['America/New_York', '2025-03-09 02:15', '2025-03-09T07:15', null, true],
    ['Pacific/Chatham', '2025-04-06 03:00', '2025-04-05T13:15', '2025-04-05T14:15', false],
    ['Pacific/Chatham', '2025-09-28 03:00', '2025-09-27T14:15', null, true],
    ['Australia/Lord_Howe', '2025-04-06 01:45', '2025-04-05T14:45', '2025-04-05T15:15', false],
    ['Australia/Lord_Howe', '2025-10-05 02:15', '2025-10-04T15:45', null, true],
    ['Asia/Kolkata', '2025-06-01 00:00', '2025-05-31T18:30', null, false],
  ])('in %s, %s', (zone, text, first, second, skipped) => {
    const reader = auto(zone);
    expect(readBy(reader, text)?.slice(0, 16)).toBe(first);
    const expected = second === null ? NaN : Date.parse(`${second}:00Z`) * 1000;
    expect(reader.second).toEqual(expected);
    expect(reader.skipped).toBe(skipped);
  });

  test('read many in a row are those read one by one', () => {
    const zone = fc.constantFrom('Europe/Dublin', 'Pacific/Chatham', 'Australia/Lord_Howe', 'UTC');
    const clocks = fc.array(
      fc.oneof(
        fc.integer({ min: Date.UTC(1950, 0, 1), max: Date.UTC(2060, 0, 1) }),
        fc.integer({ min: Date.UTC(2025, 9, 24), max: Date.UTC(2025, 9, 28) }),
        fc.integer({ min: Date.UTC(2025, 3, 4), max: Date.UTC(2025, 3, 8) }),
      ),
      { maxLength: 30 },
    );
    fc.assert(
      fc.property(zone, clocks, (name, shown) => {
        const rules = zoneRules(name);
        const clock = new LocalClock(rules);
        for (const each of shown) {
          const expected = readLocal(rules, each);
          expect(clock.read(each)).toBe(expected.at);
          expect(clock.second).toEqual(expected.second ?? NaN);
          expect(clock.skipped).toBe(expected.skipped);
        }
      }),
    );
  });
});

describe('times in a given pattern', () => {
  const by = (pattern: string, zone = 'UTC') =>
    new PatternTimeReader(compileTimePattern(pattern), new LocalClock(zoneRules(zone)));

  test.each([
    ['dd/MM/yyyy HH:mm', '13/02/2025 08:15', '2025-02-13T08:15:00.000000Z'],
    [
      "yyyy-MM-dd'T'HH:mm:ss.SSSXXX",
      '2025-02-13T08:15:01.123456+01:00',
      '2025-02-13T07:15:01.123456Z',
    ],
    ['M/d/yy h:mm a', '2/13/25 12:15 am', '2025-02-13T00:15:00.000000Z'],
    ['yyyyMMddHHmm', '202502130815', '2025-02-13T08:15:00.000000Z'],
    ["dd.MM.yyyy 'um' HH'Uhr'mm", '13.02.2025 um 08Uhr15', '2025-02-13T08:15:00.000000Z'],
    ['dd-MMM-yyyy HH:mm', '13-Feb-2025 08:15', '2025-02-13T08:15:00.000000Z'],
    ['EEE d MMMM yyyy', 'Thu 13 February 2025', '2025-02-13T00:00:00.000000Z'],
    ['t', '1740816900', '2025-03-01T08:15:00.000000Z'],
  ])('%s reads %s', (pattern, text, expected) => {
    expect(readBy(by(pattern), text)).toBe(expected);
  });

  test.each([
    ['dd/MM/yyyy HH:mm', '13/02/2025'],
    ['dd/MM/yyyy', '31/02/2025'],
    ['dd/MM/yyyy HH:mm', '13/02/2025 24:15'],
    ['dd/MM/yyyy', '13/02/2025 '],
    ['yyyy-MM-dd', '45717'],
    ['dd-MMM-yyyy', '13-Foo-2025'],
  ])('%s does not read %s', (pattern, text) => {
    expect(readBy(by(pattern), text)).toBeNull();
  });

  test('are read in the zone of the plan', () => {
    const reader = by('dd/MM/yyyy HH:mm', 'Europe/Dublin');
    expect(readBy(reader, '26/10/2025 01:30')).toBe('2025-10-26T00:30:00.000000Z');
    expect(reader.second).toBe(Date.UTC(2025, 9, 26, 1, 30) * 1000);
  });

  test('by compiled steps are what date-fns reads', () => {
    const pattern = 'yyyy-MM-dd HH:mm:ss';
    const reader = by(pattern);
    fc.assert(
      fc.property(fc.integer({ min: Date.UTC(1950, 0, 1), max: Date.UTC(2099, 0, 1) }), (at) => {
        const text = new Date(at).toISOString().slice(0, 19).replace('T', ' ');
        const expected = parseByDateFns(text, pattern, new Date(0), { in: tz('UTC') }).getTime();
        const bytes = Buffer.from(text);
        expect(reader.read(bytes, 0, bytes.length)).toBeNull();
        expect(reader.micros).toBe(expected * 1000);
      }),
      { numRuns: 100 },
    );
  });

  test.each(['HH:mm', 'YYYY-MM-DD', 'dd.mm.yyyy', "yyyy-MM-dd '", 'foo', 'yyyy-MM'])(
    '%s is refused as a pattern with a sentence',
    (pattern) => {
      expect(() => compileTimePattern(pattern)).toThrow(IntakeFailure);
    },
  );
});
