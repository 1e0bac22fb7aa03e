import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { refusalReasons, skipReasons, warningReasons } from '../../shared/row-reasons.ts';
import { BinaryCopy } from '../../server/intake/binary-copy.ts';
import { IntakeFailure } from '../../server/intake/failure.ts';
import type { ShapeReader } from '../../server/intake/shapes/shape-reader.ts';
import { StageReader } from '../../server/intake/stage-reader.ts';
import { RowScanner } from '../../server/intake/text/row-scanner.ts';
import { readText, type ReadTextOptions } from '../support/read-text.ts';

const header = 'job,area,arrived,started,finished,quantity,due,family';
const plan = {
  columns: {
    job: 'job',
    area: 'area',
    arrived: 'arrived',
    started: 'started',
    finished: 'finished',
    quantity: 'quantity',
    due: 'due',
    family: 'family',
  },
};

/** Reads one row under the header. */
async function readRow(row: string | Buffer, options: ReadTextOptions = {}) {
  const text = Buffer.concat([Buffer.from(`${header}\n`), Buffer.from(row)]);
  const { rows, account, areas } = await readText(text, {
    ...options,
    plan: { ...plan, ...options.plan },
  });
  const [first] = rows;
  if (!first || rows.length !== 1) throw new Error(`${rows.length} rows`);
  return { ...first, account, areas };
}

const long = 'x'.repeat(501);
const day = '2026-01-05T';

describe('a row is refused', () => {
  // The rules are those of the product's own design; each line is a row and the reason for it.
  test.each([
    ['J1,Bench,,2026-01-05,2026-01-06,1', 'wrong-number-of-columns'],
    ['J1,Bench,,2026-01-05,2026-01-06,1,,,', 'wrong-number-of-columns'],
    ['"J1"x,Bench,,2026-01-05,2026-01-06,1,,', 'malformed-quotes'],
    ['"J1,Bench,,2026-01-05,2026-01-06,1,,', 'quote-not-closed'],
    [',Bench,,2026-01-05,2026-01-06,1,,', 'missing-job'],
    ['  ,Bench,,2026-01-05,2026-01-06,1,,', 'missing-job'],
    ['J1,,,2026-01-05,2026-01-06,1,,', 'missing-area'],
    [`${long},Bench,,2026-01-05,2026-01-06,1,,`, 'cell-too-long'],
    [`J1,${long},,2026-01-05,2026-01-06,1,,`, 'cell-too-long'],
    [`J1,Bench,,2026-01-05,2026-01-06,1,,${'y'.repeat(4001)}`, 'cell-too-long'],
    ['J1,Bench,,31/02/2026,2026-01-06,1,,', 'unreadable-time'],
    ['J1,Bench,,2026-01-05,soon,1,,', 'unreadable-time'],
    ['J1,Bench,,2026-01-05,2026-01-06,1,soon,', 'unreadable-time'],
    ['J1,Bench,,,,1,,', 'no-time'],
    ['J1,Bench,,1949-12-31T23:59:59Z,2026-01-06,1,,', 'time-before-1950'],
    ['J1,Bench,,2026-01-05,2026-06-02T00:00:01Z,1,,', 'time-after-receipt'],
    [`J1,Bench,,${day}10:00Z,${day}09:59Z,1,,`, 'finish-before-start'],
    [`J1,Bench,${day}10:00Z,${day}09:59Z,,1,,`, 'start-before-arrival'],
    [`J1,Bench,${day}10:00Z,,${day}09:59Z,1,,`, 'finish-before-arrival'],
    ['J1,Bench,,2026-01-05,2026-01-06,many,,', 'unreadable-number'],
    ['J1,Bench,,2026-01-05,2026-01-06,"1,5,1",,', 'unreadable-number'],
    ['J1,Bench,,2026-01-05,2026-01-06,0,,', 'quantity-not-positive'],
    ['J1,Bench,,2026-01-05,2026-01-06,-3,,', 'quantity-not-positive'],
    ['J1,Bench,,2026-01-05,2026-01-06,0.000,,', 'quantity-not-positive'],
  ])('%s: %s', async (row, reason) => {
    const read = await readRow(row);
    expect(read.outcome).toBe('refused');
    expect(read.reason).toBe(reason);
    expect(read.raw).toBe(row);
    expect(read.line).toBe(2);
    expect(read.detail).toMatch(/^[A-Z].*\.$/);
    expect(read.account).toMatchObject({ rowsRead: 1, refused: 1, refusedBy: { [reason]: 1 } });
    expect(read.areas).toEqual([]);
  });

  test.each([
    ['job', Buffer.from('J\xff,Bench,,2026-01-05,,1,,', 'latin1')],
    ['area', Buffer.from('J1,B\xffnch,,2026-01-05,,1,,', 'latin1')],
    ['area, quoted', Buffer.from('J1,"B\xff ""n""ch",,2026-01-05,,1,,', 'latin1')],
    ['time', Buffer.from('J1,Bench,,2026-01-05\xff,,1,,', 'latin1')],
    ['job with a zero byte', Buffer.from('J\0,Bench,,2026-01-05,,1,,', 'latin1')],
  ])('for bytes that are no text in the %s', async (_, row) => {
    expect((await readRow(row)).reason).toBe('unreadable-bytes');
  });

  test('for an area that is not known, where the plan says so', async () => {
    const options = { plan: { unknownAreas: 'refuse' as const }, knownAreas: ['bench'] };
    expect((await readRow('J1,Oven,,2026-01-05,,1,,', options)).reason).toBe('unknown-area');
    expect((await readRow('J1, BENCH,,2026-01-05,,1,,', options)).outcome).toBe('accepted');
  });

  test('for a date that contradicts the order of day and month', async () => {
    const { rows, plan: read } = await readText(
      'job,area,start\nJ1,A,13/02/2026\nJ2,A,14/02/2026\nJ3,A,02/15/2026\n',
    );
    expect(read.dateOrder).toBe('day-first');
    expect(rows.map(({ reason }) => reason)).toEqual([null, null, 'contradicts-date-order']);
  });

  test('by the last moment that counts: a day after receipt, and 1950 in the zone of the plan', async () => {
    expect((await readRow('J1,Bench,,2026-06-02T00:00:00Z,,1,,')).outcome).toBe('accepted');
    const inAuckland = async (row: string) =>
      (await readRow(row, { plan: { timeZone: 'Pacific/Auckland' } })).reason;
    expect(await inAuckland('J1,Bench,,1950-01-01 00:00,,1,,')).toBeNull();
    expect(await inAuckland('J1,Bench,,1949-12-31 23:59,,1,,')).toBe('time-before-1950');
  });
});

describe('a row is skipped', () => {
  test.each([
    ['\n', 'blank-line'],
    ['   \r\n', 'blank-line'],
    [',,,,,,,', 'only-delimiters'],
    [' , ,"",,,,,', 'only-delimiters'],
    [',,', 'only-delimiters'],
    [header, 'repeated-header'],
    ['"job", area ,arrived,started,finished,quantity,due,family', 'repeated-header'],
  ])('%j: %s', async (row, reason) => {
    const read = await readRow(row);
    expect(read.outcome).toBe('skipped');
    expect(read.reason).toBe(reason);
    expect(read.account).toMatchObject({ rowsRead: 1, skipped: 1, skippedBy: { [reason]: 1 } });
  });
});

describe('a row is accepted', () => {
  test('with its times, to the microsecond, and no warning', async () => {
    const read = await readRow(
      'J1,Bench,2026-01-05T08:00Z,2026-01-05T09:00Z,2026-01-05T10:00Z,2,,',
    );
    expect(read).toMatchObject({
      outcome: 'accepted',
      warnings: [],
      job: 'J1',
      area: 'Bench',
      arrived: '2026-01-05T08:00:00.000Z',
      started: '2026-01-05T09:00:00.000Z',
      finished: '2026-01-05T10:00:00.000Z',
    });
  });

  test.each([
    ['J1,Bench,,2026-01-05,,1,,', ['no-finish']],
    ['J1,Bench,,,2026-01-05,1,,', ['no-start']],
    ['J1,Bench,2026-01-05,,,1,,', ['no-finish', 'no-start']],
    ['J1,Bench,,2026-01-05,null,1,,', ['no-finish']],
    ['J1,Bench,,2026-01-05,2026-01-06,0.5,2030-01-01,', []],
    ['J1,Bench,,2026-01-05,2026-01-05,1,,', []],
  ])('%s with %j', async (row, warnings) => {
    const read = await readRow(row);
    expect(read.outcome).toBe('accepted');
    expect(read.warnings).toEqual(warnings);
  });

  test('with a warning for bytes that are no text elsewhere', async () => {
    const read = await readRow(Buffer.from('J1,Bench,,2026-01-05,2026-01-06,1,,f\xff', 'latin1'));
    expect(read.warnings).toEqual(['unreadable-bytes-elsewhere']);
  });

  test('with the first spelling of its area, warned of where it is written otherwise', async () => {
    const { rows, areas } = await readText(
      [
        'job,area,start',
        'J1,Final Check,2026-01-05',
        'J2, final   check ,2026-01-05',
        'J3,FINAL CHECK,2026-01-05',
        'J4,Final Check,2026-01-05',
        'J5,Stra\u00dfe,2026-01-05',
        'J6,STRASSE,2026-01-05',
        'J7,Caf\u00e9,2026-01-05',
        'J8,Cafe\u0301,2026-01-05',
      ].join('\n'),
    );
    expect(rows.map(({ area }) => area)).toEqual([
      ...Array.from({ length: 4 }, () => 'Final Check'),
      ...['Straße', 'Straße', 'Café', 'Café'],
    ]);
    const folded = rows.map(({ warnings }) => warnings.includes('area-spelling-folded'));
    expect(folded).toEqual([false, true, true, false, false, true, false, true]);
    expect(areas.map(({ name, rows: count }) => [name, count])).toEqual([
      ['Final Check', 4],
      ['Straße', 2],
      ['Café', 2],
    ]);
  });

  test('with a warning where a column mixes forms of times', async () => {
    const { rows } = await readText(
      'job,area,start\nJ1,A,2026-01-05\nJ2,A,46027.5\nJ3,A,1767607200\n',
    );
    expect(rows.map(({ warnings }) => warnings.includes('mixed-time-forms'))).toEqual([
      false,
      true,
      true,
    ]);
  });

  // Clocks in Dublin go back at 02:00 summer time on 2025-10-26 and forward at 01:00 on 2026-03-29.
  test.each([
    ['2025-10-26 00:30', '2025-10-26 01:30', '2025-10-26T00:30', 'first, where both suit'],
    ['2025-10-26T00:45Z', '2025-10-26 01:30', '2025-10-26T01:30', 'second, where only it suits'],
    [
      '2025-10-26 01:45',
      '2025-10-26 01:30',
      '2025-10-26T01:30',
      'second behind an ambiguous start',
    ],
  ])('started %s, finished %s: %s, the %s', async (started, finished, expected) => {
    const read = await readRow(`J1,Bench,,${started},${finished},1,,`, {
      plan: { timeZone: 'Europe/Dublin' },
    });
    expect(read.finished?.slice(0, 16)).toBe(expected);
    expect(read.warnings).toContain('ambiguous-local-time');
  });

  test('with a warning for a local time that does not occur', async () => {
    const read = await readRow('J1,Bench,,2026-03-29 01:30,,1,,', {
      plan: { timeZone: 'Europe/Dublin' },
    });
    expect(read.started).toBe('2026-03-29T01:30:00.000Z');
    expect(read.warnings).toContain('skipped-local-time');
  });

  test('not where even the second occurrence precedes the start', async () => {
    const read = await readRow('J1,Bench,,2025-10-26T01:31Z,2025-10-26 01:30,1,,', {
      plan: { timeZone: 'Europe/Dublin' },
    });
    expect(read.reason).toBe('finish-before-start');
  });
});

describe('a file', () => {
  test('with more rows than are taken fails with a sentence', () => {
    const none = { rows: new BinaryCopy(65_536), refused: new BinaryCopy(65_536) };
    const stage = { ...none, sendFull: () => Promise.resolve() };
    const shape: ShapeReader = {
      ...{ stagedColumns: [], part: 0, warnings: 0, refusal: null },
      ...{ skipReason: 'blank-line' as const, read: () => 'skipped' as const },
      ...{ next: () => null, write: () => undefined },
      told: () => ({ job: null, area: null, arrived: NaN, started: NaN, finished: NaN }),
    };
    const reader = new StageReader(1, shape, stage, 3);
    const scan = (text: string) =>
      new RowScanner(',').scan(Buffer.from(text), true, (row) => reader.take(row));
    expect(() => scan('a,b\n1,2\n3,4\n')).not.toThrow();
    expect(() => scan('5,6\n')).toThrow(
      /^The file has more than 3 rows\. Nothing of it was kept\./,
    );
  });
});

describe('the row account', () => {
  const bits = fc.oneof(
    fc.constantFrom('J1', 'Bench', ' bench', '2026-01-05', '2025-10-26 01:30', '46027.5', '0', '3'),
    fc.constantFrom('"', '""', ',', ',', ',', '\n', '\r\n', '\n', ' ', 'é', '31/02/2026'),
    fc.constantFrom(
      'job,area,arrived,started,finished,quantity,due,family\n',
      'J2,Bench,,2026-01-05,,1,,\n',
    ),
    fc.string({ maxLength: 3 }),
  );

  test('adds up for any garbage, and every line of the text is in a row', async () => {
    await fc.assert(
      fc.asyncProperty(fc.array(bits, { maxLength: 60 }), async (parts) => {
        const text = `${header}\n${parts.join('')}`;
        const { rows, account } = await readText(text, { plan });
        expect(account.rowsRead).toBe(rows.length);
        const count = (outcome: string): number =>
          rows.filter((row) => row.outcome === outcome).length;
        expect(account.skipped).toBe(count('skipped'));
        expect(account.refused).toBe(count('refused'));
        expect(account.rowsRead - account.skipped - account.refused).toBe(count('accepted'));
        const sum = (by: Record<string, number>): number =>
          Object.values(by).reduce((total, each) => total + each, 0);
        expect(sum(account.skippedBy)).toBe(account.skipped);
        expect(sum(account.refusedBy)).toBe(account.refused);
        expect(Object.keys(account.skippedBy).every((code) => code in skipReasons)).toBe(true);
        expect(Object.keys(account.refusedBy).every((code) => code in refusalReasons)).toBe(true);
        expect(Object.keys(account.warnings).every((code) => code in warningReasons)).toBe(true);
        const lines = rows.reduce((total, { raw }) => total + raw.split('\n').length, 0);
        const body = text.slice(header.length + 1);
        expect(lines).toBe(body === '' ? 0 : body.replace(/\n$/, '').split('\n').length);
      }),
      { numRuns: 500 },
    );
  });

  test('is never broken by random bytes: 200 files are read or fail with a sentence', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.uint8Array({ maxLength: 400 }),
        fc.boolean(),
        async (bytes, hasHeader) => {
          const file = Buffer.concat([Buffer.from(hasHeader ? `${header}\n` : ''), bytes]);
          try {
            const { rows, account } = await readText(file, hasHeader ? { plan } : {});
            expect(account.rowsRead).toBe(rows.length);
          } catch (error) {
            if (!(error instanceof IntakeFailure)) throw error;
            expect(error.message).toMatch(/[.]$/);
          }
        },
      ),
      { numRuns: 200 },
    );
  });
});
