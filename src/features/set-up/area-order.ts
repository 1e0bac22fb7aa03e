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

/** The order as it is guessed from the data; servers as declared, else as guessed. */
export function guessedOrder(areas: SetUp['areas']): OrderedArea[] {
  const inOrder = [...areas].sort(
    (one, other) => one.guessedPosition - other.guessedPosition || one.position - other.position,
  );
  return inOrder.map((area, index) => ({
    zoneId: area.zoneId,
    name: area.name,
    besideBefore: inOrder[index - 1]?.guessedPosition === area.guessedPosition,
    servers: String(area.servers ?? area.guessedServers ?? ''),
  }));
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
