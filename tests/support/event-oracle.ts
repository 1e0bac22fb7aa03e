/** An event of a job at an area. */
export interface OracleEvent {
  job: string;
  area: string;
  event: 'arrived' | 'started' | 'finished';
  /** Milliseconds. */
  at: number;
}

/** What events tell of one stay. */
export interface PairedStay {
  job: string;
  area: string;
  arrived: number | null;
  started: number | null;
  finished: number | null;
}

/**
 * Pairs events by the words of the rule, slowly: per job and area each start takes the earliest unused finish
 * at or after it and not after the next start; then each arrival takes the next start or left-over finish,
 * unless another arrival comes before.
 */
export function pairByRule(events: readonly OracleEvent[]): PairedStay[] {
  const groups = new Map<string, OracleEvent[]>();
  for (const event of events) {
    const key = JSON.stringify([event.job, event.area]);
    const group = groups.get(key) ?? [];
    const isKnown = group.some((each) => each.event === event.event && each.at === event.at);
    if (!isKnown) groups.set(key, [...group, event]);
  }
  return [...groups.values()].flatMap(pairGroup);
}

function pairGroup(events: readonly OracleEvent[]): PairedStay[] {
  const [{ job = '', area = '' } = {}] = events;
  const timesOf = (kind: OracleEvent['event']) =>
    events
      .filter(({ event }) => event === kind)
      .map(({ at }) => at)
      .sort((a, b) => a - b);
  const starts = timesOf('started');
  const unused = new Set(timesOf('finished'));
  const begun = starts.map((started, index) => {
    const next = starts[index + 1] ?? Infinity;
    const finished = [...unused].find((at) => at >= started && at <= next) ?? null;
    if (finished !== null) unused.delete(finished);
    return { job, area, arrived: null, started, finished };
  });
  const left = [...unused].map((finished) => ({
    job,
    area,
    arrived: null,
    started: null,
    finished,
  }));
  return addArrivals([...begun, ...left], timesOf('arrived'), { job, area });
}

function addArrivals(
  stays: readonly PairedStay[],
  arrivals: readonly number[],
  where: { job: string; area: string },
): PairedStay[] {
  const about = ({ started, finished }: PairedStay): number => started ?? finished ?? 0;
  // At one instant a start comes before a finish that no start took.
  const ordered = [...stays].sort(
    (a, b) => about(a) - about(b) || Number(a.started === null) - Number(b.started === null),
  );
  const result = ordered.map((stay) => ({ ...stay }));
  const waiting = arrivals.flatMap((arrived, index) => {
    const until = arrivals[index + 1] ?? Infinity;
    // One that comes at the very instant of the next arrival belongs to that.
    const stay = result.find((each) => about(each) >= arrived);
    if (!stay || about(stay) >= until || stay.arrived !== null) {
      return [{ ...where, arrived, started: null, finished: null }];
    }
    stay.arrived = arrived;
    return [];
  });
  return [...result, ...waiting];
}
