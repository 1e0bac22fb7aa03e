/** Neighbours whose mean places differ by no more than this may work side by side. */
const closePlaces = 0.08;
/** Of the jobs of the less visited of two areas that work side by side, at most this share visits both. */
const sharedJobs = 0.1;

/** An area by its mean place in the ways of jobs, 0 to 1; see `AreaOnWay`. */
export interface PlacedArea {
  areaId: number;
  place: number | null;
  jobs: number;
  alsoVisit: Record<string, number>;
}

/**
 * A guess at the order of flow: areas by the mean place of their first visits; neighbours at nearly the same
 * place that hardly share a job work side by side. Common practice, to be confirmed by a person.
 *
 * @returns position from 1 by area; areas that no job shows come last, each with a place of its own
 */
export function guessFlowOrder(areas: readonly PlacedArea[]): Map<number, number> {
  const inOrder = areas
    .map((area, index) => ({ area, index }))
    .sort(
      (one, other) =>
        (one.area.place ?? Infinity) - (other.area.place ?? Infinity) || one.index - other.index,
    )
    .map(({ area }) => area);
  const positions = new Map<number, number>();
  let position = 0;
  let first: PlacedArea | null = null;
  for (const area of inOrder) {
    if (!first || !areSideBySide(first, area)) {
      position += 1;
      first = area;
    }
    positions.set(area.areaId, position);
  }
  return positions;
}

function areSideBySide(one: PlacedArea, other: PlacedArea): boolean {
  if (one.place === null || other.place === null) return false;
  if (Math.abs(one.place - other.place) > closePlaces) return false;
  const both = one.alsoVisit[String(other.areaId)] ?? 0;
  return both <= sharedJobs * Math.min(one.jobs, other.jobs);
}
