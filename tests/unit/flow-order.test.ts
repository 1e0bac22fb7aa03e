import { describe, expect, it } from 'vitest';
import { guessFlowOrder, type PlacedArea } from '../../server/methods/flow-order.ts';
import { guessedOrder, moved, placed } from '../../src/features/set-up/area-order.ts';

const area = (
  areaId: number,
  place: number | null,
  alsoVisit: Record<string, number> = {},
): PlacedArea => ({ areaId, place, jobs: place === null ? 0 : 100, alsoVisit });

describe('the guess at the order of flow', () => {
  it('goes by the mean place of first visits', () => {
    const order = guessFlowOrder([area(1, 0.9), area(2, 0.1), area(3, 0.5)]);
    expect([...order]).toEqual([
      [2, 1],
      [3, 2],
      [1, 3],
    ]);
  });

  it('puts areas side by side that are at one place and hardly share a job', () => {
    const order = guessFlowOrder([
      area(1, 0),
      area(2, 0.5, { 3: 4 }),
      area(3, 0.52, { 2: 4 }),
      area(4, 1),
    ]);
    expect([...order.values()]).toEqual([1, 2, 2, 3]);
  });

  it('keeps areas apart that most jobs visit both, however close', () => {
    const order = guessFlowOrder([area(1, 0.5, { 2: 90 }), area(2, 0.52, { 1: 90 })]);
    expect([...order.values()]).toEqual([1, 2]);
  });

  it('puts areas last that no job shows', () => {
    const order = guessFlowOrder([area(1, null), area(2, 0.4), area(3, null)]);
    expect([...order]).toEqual([
      [2, 1],
      [1, 2],
      [3, 3],
    ]);
  });
});

describe('an order that is being made', () => {
  const asGuessed = guessedOrder(
    ['Saw', 'Lathe', 'Mill'].map((name, index) => ({
      zoneId: index + 1,
      name,
      position: index + 1,
      guessedPosition: index === 2 ? 2 : index + 1,
      servers: null,
      guessedServers: index === 0 ? null : 4,
    })),
  );

  it('begins with the guess', () => {
    expect(placed(asGuessed)).toEqual([
      { zoneId: 1, position: 1, servers: null },
      { zoneId: 2, position: 2, servers: 4 },
      { zoneId: 3, position: 2, servers: 4 },
    ]);
  });

  it('moves areas, and the first stands beside nothing', () => {
    const earlier = moved(moved(asGuessed, 2, -1), 1, -1);
    expect(earlier.map(({ name }) => name)).toEqual(['Mill', 'Saw', 'Lathe']);
    expect(earlier[0]?.besideBefore).toBe(false);
    expect(moved(asGuessed, 0, -1)).toEqual(asGuessed);
  });

  it.each(['0', '2.5', 'four', '10001', '-1'])('is not whole with %s servers', (servers) => {
    expect(placed(asGuessed.map((each) => ({ ...each, servers })))).toBeNull();
  });
});
