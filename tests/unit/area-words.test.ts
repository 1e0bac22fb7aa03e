import { describe, expect, it } from 'vitest';
import type { Area, AreaMove, Areas } from '../../shared/contracts/areas.ts';
import { startOfDay } from '../../src/features/areas/start-of-day.ts';
import {
  areasSentence,
  consequences,
  moveInWords,
  shownAreas,
  spellingsInWords,
  undoing,
} from '../../src/features/areas/words.ts';

const timeZone = 'Europe/Dublin';
const area = (id: number, name: string, more: Partial<Area> = {}): Area => ({
  id,
  name,
  position: id,
  servers: null,
  serversFrom: null,
  spellings: [name],
  toldRows: 10,
  rows: 10,
  firstAt: '2026-08-01T08:00:00.000Z',
  latestAt: '2026-10-01T08:00:00.000Z',
  mergedInto: null,
  ...more,
});
const move = (
  areaName: string,
  targetAreaName: string,
  more: Partial<AreaMove> = {},
): AreaMove => ({
  id: 1,
  areaId: 2,
  areaName,
  targetAreaId: 1,
  targetAreaName,
  from: null,
  rows: 4812,
  movedBy: 'Ivo Quill',
  movedAt: '2026-10-01T08:00:00.000Z',
  ...more,
});
const bench = area(1, 'Repair bench');
const bench1 = area(2, 'Repair Bench 1', { toldRows: 4812, rows: 4812 });
const oven = area(3, 'Oven');
const all = (given: Partial<Areas>): Areas => ({
  areas: [bench, bench1, oven],
  moves: [],
  likelyPairs: [],
  ...given,
});

describe('the sentence of the areas', () => {
  it('tells how many there are and that nothing is moved', () => {
    expect(areasSentence(all({}), timeZone)).toBe(
      'Work passes 3 areas, from Repair bench to Oven; each row counts for the area that its file names.',
    );
    expect(areasSentence(all({ areas: [oven] }), timeZone)).toBe(
      'Work passes one area, Oven; each row counts for the area that its file names.',
    );
    expect(areasSentence(all({ areas: [] }), timeZone)).toBe('There are no areas yet.');
  });

  it('begins with what may be one area, and ends with what is moved', () => {
    const merged = { ...bench1, rows: 0, mergedInto: 1 };
    expect(
      areasSentence(
        all({
          areas: [bench, merged, oven],
          moves: [move('Repair Bench 1', 'Repair bench')],
          likelyPairs: [{ areaId: 3, targetAreaId: 1 }],
        }),
        timeZone,
      ),
    ).toBe(
      '“Oven” and “Repair bench” may be one area, written in two ways. Work passes 2 areas, from Repair bench to Oven; “Repair Bench 1” counts as “Repair bench”.',
    );
    const two = [
      { areaId: 3, targetAreaId: 1 },
      { areaId: 2, targetAreaId: 1 },
    ];
    const moves = [move('A', 'B'), move('C', 'D')];
    expect(areasSentence(all({ likelyPairs: two, moves }), timeZone)).toBe(
      '2 pairs of areas may be one area each, written in two ways. Work passes 3 areas, from Repair bench to Oven; 2 moves between names are in force.',
    );
  });
});

describe('what a move will do', () => {
  const given = { area: bench1, target: bench, from: null, moves: [], loops: [], timeZone };

  it('is told with the rows of a merge, and that it can be undone', () => {
    expect(consequences(given)).toEqual([
      '4,812 rows of “Repair Bench 1” will count as “Repair bench”, and so will those of later uploads. “Repair Bench 1” is then no longer shown by itself.',
      'Nothing is lost: you can undo it.',
    ]);
  });

  it('says what becomes of servers, and of rows that are moved already', () => {
    const moves = [move('Repair Bench 1', 'Oven', { from: '2026-08-02T23:00:00.000Z', rows: 800 })];
    expect(consequences({ ...given, area: { ...bench1, servers: 2 }, moves })).toEqual([
      '4,012 rows of “Repair Bench 1” will count as “Repair bench”, and so will those of later uploads. “Repair Bench 1” is then no longer shown by itself.',
      'Rows of “Repair Bench 1” that are moved from a day on stay where they are.',
      'Its 2 servers will not be added to those of “Repair bench”.',
      'Nothing is lost: you can undo it.',
    ]);
  });

  it('names the day from which rows are moved, and the loop that loses them', () => {
    const loops = [
      { name: 'Front', areaIds: [2, 3] },
      { name: 'Whole', areaIds: [1, 2, 3] },
    ];
    expect(consequences({ ...given, from: '2026-08-02T23:00:00.000Z', loops })).toEqual([
      'Rows of “Repair Bench 1” that start on 3 Aug 2026 or later will count as “Repair bench”; where no start is told, their arrival decides, else their finish. Earlier rows stay as they are.',
      'The loop “Front” names “Repair Bench 1” and not “Repair bench”: it loses these rows.',
      'Nothing is lost: you can undo it.',
    ]);
  });
});

describe('a move in words', () => {
  it('has its day, and its time where it is not the beginning of the day', () => {
    expect(moveInWords(move('A', 'B', { from: '2026-08-02T23:00:00.000Z' }), timeZone)).toBe(
      '“A” counts as “B” from 3 Aug 2026 on',
    );
    expect(moveInWords(move('A', 'B', { from: '2026-08-03T05:30:00.000Z' }), timeZone)).toBe(
      '“A” counts as “B” from 3 Aug 2026, 06:30 on',
    );
  });

  it('taken back says what comes back', () => {
    expect(undoing(move('A', 'B', { rows: 1 }))).toBe(
      '1 row will count for “A” again, which is shown by itself as before. Nothing is lost: you can move them again.',
    );
  });
});

describe('the spellings of an area', () => {
  it('are its own and those of the areas merged into it, which are not shown', () => {
    const given = all({ areas: [bench, { ...bench1, mergedInto: 1 }, oven] });
    expect(shownAreas(given).map((each) => each.name)).toEqual(['Repair bench', 'Oven']);
    expect(spellingsInWords(bench, given)).toBe('“Repair bench”; merged: “Repair Bench 1”');
    expect(spellingsInWords(oven, given)).toBe('“Oven”');
  });
});

describe('the beginning of a day', () => {
  it('is that of the site, also where the clock was set on that day', () => {
    expect(startOfDay('2026-08-03', timeZone)).toBe('2026-08-02T23:00:00.000Z');
    expect(startOfDay('2026-10-25', timeZone)).toBe('2026-10-24T23:00:00.000Z');
    expect(startOfDay('2026-08-03', 'UTC')).toBe('2026-08-03T00:00:00.000Z');
  });

  it('is none of what is no day', () => {
    for (const day of ['', '2026-02-30', '1949-12-31', '2100-01-01', '3 August 2026'])
      expect([day, startOfDay(day, timeZone)]).toEqual([day, null]);
  });
});
