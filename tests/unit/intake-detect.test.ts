import { Readable } from 'node:stream';
import { describe, expect, test } from 'vitest';
import { detect } from '../../server/intake/detect/detect.ts';
import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { openFile } from '../../server/intake/open-file.ts';
import { previewOf } from '../../server/intake/preview.ts';

async function detected(text: string | Buffer, plan: ColumnPlan | null, timeZone = 'UTC') {
  const open = async function* () {
    await Promise.resolve();
    yield Buffer.from(text);
  };
  return detect({ file: await openFile(open, plan ?? {}), plan, timeZone });
}

const guess = (text: string) => detected(text, null, 'Europe/Dublin');

describe('the guess', () => {
  test.each([
    [
      'job,area,start,finish\nJ1,Bench,2026-01-05,2026-01-06\n',
      ',',
      { job: 'job', area: 'area', started: 'start', finished: 'finish' },
    ],
    [
      'WorkOrder\tWorkCenter\tActual Start\tActual Finish\tPlanned Start\tDue Date\nA1\tX\t2026-01-05 08:00\t2026-01-05 09:00\t2026-01-01\t2026-03-03\n',
      '\t',
      {
        job: 'WorkOrder',
        area: 'WorkCenter',
        started: 'Actual Start',
        finished: 'Actual Finish',
        due: 'Due Date',
      },
    ],
    [
      'Auftrag-Nr.;Arbeitsplatz;Eingang;Beginn;Ende;Menge\nA1;Fräsen;01.02.2026;01.02.2026 08:00;02.02.2026 09:00;5\n',
      ';',
      {
        job: 'Auftrag-Nr.',
        area: 'Arbeitsplatz',
        arrived: 'Eingang',
        started: 'Beginn',
        finished: 'Ende',
        quantity: 'Menge',
      },
    ],
    [
      'Numéro de série|Poste de travail|Date de début|Date de fin\nA1|Tour|13/02/2026|14/02/2026\n',
      '|',
      {
        job: 'Numéro de série',
        area: 'Poste de travail',
        started: 'Date de début',
        finished: 'Date de fin',
      },
    ],
    [
      'serial_no,order type,station,queue_in,track_in,track_out\nS1,repair,Oven,1740816900,1740817900,1740818900\n',
      ',',
      {
        job: 'serial_no',
        area: 'station',
        arrived: 'queue_in',
        started: 'track_in',
        finished: 'track_out',
      },
    ],
  ])('finds the columns of %j', async (text, delimiter, columns) => {
    const found = await guess(text);
    expect(found.delimiter).toBe(delimiter);
    expect(found.plan?.columns).toMatchObject(columns);
    expect(found.plan?.timeZone).toBe('Europe/Dublin');
    for (const column of Object.keys(columns)) {
      expect(found.reasons.some(({ about }) => about === column)).toBe(true);
    }
  });

  test('goes by what the cells look like where the header says nothing', async () => {
    const rows = ['j1,x,08:00,09:00', 'j2,x,09:00,11:00', 'j3,y,09:30,10:00', 'j4,y,10:00,10:00'];
    const text = rows.map((row) => row.replaceAll(/(\d\d:\d\d)/g, '2026-01-05 $1')).join('\n');
    expect((await guess(`a,b,c,d\n${text}\n`)).plan?.columns).toEqual({
      job: 'a',
      area: 'b',
      started: 'c',
      finished: 'd',
    });
  });

  test('is not made where a column cannot be found, and says which', async () => {
    const found = await guess('colour,size\nred,3\n');
    expect(found.plan).toBeNull();
    expect(found.missing).toHaveLength(3);
  });

  test('takes no column of text or quantities for a time', async () => {
    const found = await guess('job,area,start,end qty\nJ1,A,2026-01-05,12\nJ2,A,2026-01-05,17\n');
    expect(found.plan?.columns).toEqual({
      job: 'job',
      area: 'area',
      started: 'start',
      quantity: 'end qty',
    });
  });

  test('trusts a header that says it all over cells that are badly written', async () => {
    const text =
      'job,area,start,finish,closed\nJ1,A,05-JAN-26,2026-01-05,yes\nJ2,A,06-JAN-26,x,no\n';
    expect((await guess(text)).plan?.columns).toEqual({
      job: 'job',
      area: 'area',
      started: 'start',
      finished: 'finish',
    });
  });

  test.each([
    ['13/02/2026', 'day-first'],
    ['02/13/2026', 'month-first'],
    ['01.02.2026', 'day-first'],
    ['01/02/2026', 'unknown'],
    ['2026-02-01', null],
  ])('of the order of day and month in %s is %s', async (date, order) => {
    const found = await guess(`job,area,start\nJ1,A,${date}\n`);
    expect(found.dateOrder).toBe(order);
    expect(found.plan?.dateOrder).toBe(order === 'unknown' || order === null ? undefined : order);
  });

  test('cuts at the delimiter under which a given plan finds its columns', async () => {
    const plan = {
      shape: 'stay' as const,
      columns: { job: 'a', area: 'b', started: 'c' },
      timeZone: 'UTC',
      timeFormat: 'auto',
      unknownAreas: 'add' as const,
      mode: 'merge' as const,
    };
    const text = Buffer.from('a;b;c;d,e,f,g,h\nJ;A;2026-01-05;1,2,3,4,5\n');
    const found = await detected(text, plan);
    expect(found.places).toMatchObject({ job: 0, area: 1, times: { started: 2 } });
    expect(found.plan).toEqual({ ...plan, delimiter: ';', headerLine: 1 });
  });

  test('reads a plan’s column names without regard to case and blanks, where nothing fits exactly', async () => {
    const plan = {
      shape: 'stay' as const,
      columns: { job: 'job no', area: 'AREA', started: 'Start ' },
      timeZone: 'UTC',
      timeFormat: 'auto',
      unknownAreas: 'add' as const,
      mode: 'merge' as const,
    };
    const text = Buffer.from('Job  No,area,start\nJ,A,2026-01-05\n');
    expect((await detected(text, plan)).places).toMatchObject({
      job: 0,
      area: 1,
      times: { started: 2 },
    });
  });
});

describe('the preview', () => {
  const preview = (text: string | Buffer) =>
    previewOf({
      open: () => Readable.from([Buffer.from(text)]),
      isCut: text.length >= 262_144,
      plan: null,
      timeZone: 'UTC',
      receivedAt: new Date('2026-06-01T00:00:00Z'),
      knownAreas: new Map(),
      savedPlans: [],
    });

  test('shows the first rows as they would be read', async () => {
    const shown = await preview('job,area,start\nJ1, Bench,2026-01-05\n\n,Bench,2026-01-05\n');
    expect(shown.header).toEqual(['job', 'area', 'start']);
    expect(shown.rows).toMatchObject([
      {
        line: 2,
        cells: ['J1', ' Bench', '2026-01-05'],
        outcome: 'accepted',
        job: 'J1',
        area: 'Bench',
        started: '2026-01-05T00:00:00.000Z',
        warnings: expect.arrayContaining(['no-finish']) as string[],
      },
      { line: 3, outcome: 'skipped', reason: 'The line is blank.' },
      { line: 4, outcome: 'refused', reason: 'The row names no job.' },
    ]);
  });

  test('shows the rows also where no guess could be made', async () => {
    const shown = await preview('colour,size\nred,3\n');
    expect(shown.plan).toBeNull();
    expect(shown.rows).toMatchObject([{ line: 2, cells: ['red', '3'], job: null }]);
  });

  test('leaves out the last row of a beginning, which may be cut', async () => {
    const rows = `J1,A,2026-01-05,${'x'.repeat(200_000)}\n`;
    const text = Buffer.from(`job,area,start,note\n${rows.repeat(2)}`).subarray(0, 262_144);
    expect((await preview(text)).rows).toHaveLength(1);
  });

  test('of a file that is no text fails with a sentence', async () => {
    await expect(preview('')).rejects.toThrow(IntakeFailure);
    const picture = Buffer.from([0xff, 0xd8, 0xff, 0xe0, 0, 0x10]);
    await expect(preview(picture)).rejects.toThrow(/JPEG/);
  });
});
