import type { SetUp } from '../../../shared/contracts/set-up.ts';

/** An area in the order that is being made. */
export interface OrderedArea {
  zoneId: number;
  name: string;
  /** Works side by side with the area before it. */
  besideBefore: boolean;
  /** As typed; empty where it is left open. */
  servers: string;
}

type SetUpArea = SetUp['areas'][number];

/** The order as it is guessed from the data; servers as declared, else as guessed. */
export const guessedOrder = (areas: readonly SetUpArea[]): OrderedArea[] =>
  orderBy(
    areas,
    (area) => area.guessedPosition,
    (area) => area.servers ?? area.guessedServers,
  );

/** The order as it stands, with the servers as declared. */
export const standingOrder = (areas: readonly SetUpArea[]): OrderedArea[] =>
  orderBy(
    areas,
    (area) => area.position,
    (area) => area.servers,
  );

function orderBy(
  areas: readonly SetUpArea[],
  place: (area: SetUpArea) => number,
  servers: (area: SetUpArea) => number | null,
): OrderedArea[] {
  const inOrder = [...areas].sort(
    (one, other) => place(one) - place(other) || one.position - other.position,
  );
  return inOrder.map((area, index) => {
    const before = inOrder[index - 1];
    return {
      zoneId: area.zoneId,
      name: area.name,
      besideBefore: before !== undefined && place(before) === place(area),
      servers: String(servers(area) ?? ''),
    };
  });
}

/** The order with one area a place earlier or later; the first stands beside nothing. */
export function moved(order: readonly OrderedArea[], from: number, by: -1 | 1): OrderedArea[] {
  const to = from + by;
  const area = order[from];
  if (!area || to < 0 || to >= order.length) return [...order];
  const next = order.filter((_, index) => index !== from);
  next.splice(to, 0, area);
  return next.map((each, index) => (index === 0 ? { ...each, besideBefore: false } : each));
}

const mostServers = 10_000;

/** What was typed as a number of servers; undefined where it is none. */
export function serversOf(typed: string): number | null | undefined {
  if (typed.trim() === '') return null;
  const number = Number(typed);
  return Number.isInteger(number) && number >= 1 && number <= mostServers ? number : undefined;
}

/** The order with its places as numbers, to be confirmed. @returns null while a number of servers is none */
export function placed(
  order: readonly OrderedArea[],
): { zoneId: number; position: number; servers: number | null }[] | null {
  const areas = [];
  let position = 0;
  for (const { zoneId, besideBefore, servers: typed } of order) {
    const servers = serversOf(typed);
    if (servers === undefined) return null;
    if (!besideBefore) position += 1;
    areas.push({ zoneId, position, servers });
  }
  return areas;
}
