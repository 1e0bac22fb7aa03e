import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  areaCountedAt,
  countedSpans,
  findCircle,
  mergedAreas,
  namesOfAreas,
  type AreaMove,
} from '../../server/flow/area-moves.ts';

const august = Date.UTC(2026, 7, 1);
const move = (areaId: number, targetAreaId: number, from = -Infinity): AreaMove => ({
  id: areaId * 100 + targetAreaId,
  areaId,
  targetAreaId,
  from,
});

describe('a row of an area', () => {
  it('counts for the area itself where nothing is moved', () => {
    expect(areaCountedAt([move(1, 2)], 3, august)).toBe(3);
    expect(countedSpans([])).toEqual([]);
  });

  it('counts for the end of a chain of moves', () => {
    expect(areaCountedAt([move(1, 2), move(2, 3)], 1, august)).toBe(3);
    expect(areaCountedAt([move(2, 3), move(1, 2)], 1, august)).toBe(3);
  });

  it('counts for the other area from the very moment of the move on', () => {
    const moves = [move(1, 2, august)];
    expect(areaCountedAt(moves, 1, august - 1)).toBe(1);
    expect(areaCountedAt(moves, 1, august)).toBe(2);
  });

  it('goes by the latest move that has begun, whichever was made first', () => {
    const moves = [move(1, 3, august), move(1, 2)];
    expect(areaCountedAt(moves, 1, august - 1)).toBe(2);
    expect(areaCountedAt(moves, 1, august)).toBe(3);
  });
});

describe('moves in a circle', () => {
  it('are found, be they two or many', () => {
    expect(findCircle([move(1, 2), move(2, 1)])).toHaveLength(2);
    expect(findCircle([move(1, 2), move(2, 3), move(3, 1)])).toHaveLength(3);
    expect(findCircle([move(1, 2), move(2, 3)])).toBe(null);
  });

  it('are one also where they meet at some time only', () => {
    expect(findCircle([move(1, 2), move(2, 1, august)])).toHaveLength(2);
    // Before August 2 counts as 1; from then on 2 counts as 3, and 1 as 2.
    expect(findCircle([move(2, 1), move(2, 3, august), move(1, 2, august)])).toBe(null);
  });
});

describe('an area', () => {
  it('is merged where all its rows are moved, and another name where nothing else is', () => {
    const moves = [move(1, 2), move(2, 3, august), move(4, 2), move(4, 5, august), move(6, 1)];
    expect([...mergedAreas(moves)]).toEqual([1, 4, 6]);
    expect([...namesOfAreas(moves)]).toEqual([
      [1, 2],
      [6, 2],
    ]);
  });
});

const anyMoves = fc.uniqueArray(
  fc
    .record({
      areaId: fc.integer({ min: 1, max: 5 }),
      targetAreaId: fc.integer({ min: 1, max: 5 }),
      from: fc.constantFrom(-Infinity, 0, 10, 20),
    })
    .filter((each) => each.areaId !== each.targetAreaId)
    .map(({ areaId, targetAreaId, from }) => move(areaId, targetAreaId, from)),
  { maxLength: 8, selector: (each) => `${each.areaId} ${each.from}` },
);

describe('the spans of an area', () => {
  it('cover all of time once, and say what counts at each moment', () => {
    fc.assert(
      fc.property(
        anyMoves.filter((moves) => findCircle(moves) === null),
        fc.constantFrom(-1e9, -1, 0, 5, 10, 19, 20, 1e9),
        (moves, at) => {
          for (const areaId of new Set(moves.map((each) => each.areaId))) {
            const spans = countedSpans(moves).filter((span) => span.areaId === areaId);
            const here = spans.filter((span) => span.from <= at && at < span.until);
            expect(here.map((span) => span.countsFor)).toEqual([areaCountedAt(moves, areaId, at)]);
            expect(spans[0]?.from).toBe(-Infinity);
            expect(spans.at(-1)?.until).toBe(Infinity);
          }
        },
      ),
    );
  });

  it('end at an area that is not moved on at that time', () => {
    fc.assert(
      fc.property(
        anyMoves.filter((moves) => findCircle(moves) === null),
        (moves) => {
          for (const { from, countsFor } of countedSpans(moves))
            expect(areaCountedAt(moves, countsFor, from)).toBe(countsFor);
        },
      ),
    );
  });
});
