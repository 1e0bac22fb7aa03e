/**
 * Which area a row counts for. Rows told of one area may count for another, all of them or from a moment on;
 * that one's rows may count for a third. Pure values; moments in milliseconds since 1970 UTC.
 */

/** Rows told of an area that count for another from a moment on, until the area's next move. */
export interface AreaMove {
  id: number;
  areaId: number;
  targetAreaId: number;
  /** −Infinity where all rows are moved: the area is merged into the other. */
  from: number;
}

/** A span of time, half-open, in which rows told of an area count for one area. */
export interface CountedSpan {
  areaId: number;
  from: number;
  until: number;
  countsFor: number;
}

/** The move of an area that is in force at a moment: the latest of those that began. */
export function moveInForce(
  moves: readonly AreaMove[],
  areaId: number,
  at: number,
): AreaMove | undefined {
  let found: AreaMove | undefined;
  for (const move of moves)
    if (move.areaId === areaId && move.from <= at && (!found || move.from > found.from))
      found = move;
  return found;
}

/** The moves that a row told of an area at a moment goes through, in order; ends where it comes round. */
function wayOf(moves: readonly AreaMove[], areaId: number, at: number): AreaMove[] {
  const way: AreaMove[] = [];
  const seen = new Set([areaId]);
  for (let move = moveInForce(moves, areaId, at); move;) {
    way.push(move);
    if (seen.has(move.targetAreaId)) return way;
    seen.add(move.targetAreaId);
    move = moveInForce(moves, move.targetAreaId, at);
  }
  return way;
}

/**
 * The area for which a row told of an area counts, by the moment of its record: its start, else its
 * arrival, else its finish. The moves must form no circle.
 */
export const areaCountedAt = (moves: readonly AreaMove[], areaId: number, at: number): number =>
  wayOf(moves, areaId, at).at(-1)?.targetAreaId ?? areaId;

const momentsOf = (moves: readonly AreaMove[]): number[] =>
  [...new Set([-Infinity, ...moves.map((move) => move.from)])].sort((one, other) => one - other);

/** Moves that lead in a circle at some moment, in order; null where none do. */
export function findCircle(moves: readonly AreaMove[]): AreaMove[] | null {
  for (const at of momentsOf(moves))
    for (const areaId of new Set(moves.map((move) => move.areaId))) {
      const way = wayOf(moves, areaId, at);
      if (way.at(-1)?.targetAreaId === areaId) return way;
    }
  return null;
}

/** The areas of which no row counts for themselves at any time, because they are merged into another. */
export const mergedAreas = (moves: readonly AreaMove[]): Set<number> =>
  new Set(moves.filter((move) => move.from === -Infinity).map((move) => move.areaId));

/**
 * The areas that are another under a second name: merged into it, and moved at no other moment. What is
 * told of either is told of one area, also before it is known when a record began.
 */
export function namesOfAreas(moves: readonly AreaMove[]): Map<number, number> {
  const merged = mergedAreas(moves);
  const onlyMerged = moves.filter(
    ({ areaId }) =>
      merged.has(areaId) && moves.filter((move) => move.areaId === areaId).length === 1,
  );
  return new Map(
    onlyMerged.map(({ areaId }) => [areaId, areaCountedAt(onlyMerged, areaId, -Infinity)]),
  );
}

/**
 * For each area that has moves, whom its rows count for at which time: spans that cover all of time. Each of
 * its moves begins one.
 */
export function countedSpans(moves: readonly AreaMove[]): CountedSpan[] {
  const moments = momentsOf(moves);
  return [...new Set(moves.map((move) => move.areaId))].flatMap((areaId) => {
    const spans: CountedSpan[] = [];
    for (const from of moments) {
      const countsFor = areaCountedAt(moves, areaId, from);
      const open = spans.at(-1);
      const isOwnBorder = moves.some((move) => move.areaId === areaId && move.from === from);
      if (open?.countsFor === countsFor && !isOwnBorder) continue;
      if (open) open.until = from;
      spans.push({ areaId, from, until: Infinity, countsFor });
    }
    return spans;
  });
}
