/** Slow, obvious figures in plain code, to compare the database's with. Times are milliseconds. */
export interface OracleStay {
  entered: number;
  left: number | null;
  weight?: number;
}

const weightOf = (stay: OracleStay) => stay.weight ?? 1;

/** How much of a stay lies in [from, to). */
function overlap(stay: OracleStay, from: number, to: number): number {
  return Math.max(0, Math.min(stay.left ?? Infinity, to) - Math.max(stay.entered, from));
}

const insideAt = (stays: readonly OracleStay[], at: number) =>
  stays
    .filter((stay) => stay.entered <= at && (stay.left === null || stay.left > at))
    .reduce((sum, stay) => sum + weightOf(stay), 0);

const insideJustBefore = (stays: readonly OracleStay[], at: number) =>
  stays
    .filter((stay) => stay.entered < at && (stay.left === null || stay.left >= at))
    .reduce((sum, stay) => sum + weightOf(stay), 0);

/** Figures of [from, to) by looking at every stay; the peak by looking at every moment of change. */
export function oracleFigures(stays: readonly OracleStay[], from: number, to: number) {
  const within = (at: number | null) => at !== null && at >= from && at < to;
  const moments = [
    from,
    ...stays.flatMap((stay) => [stay.entered, stay.left]).filter(within),
  ] as number[];
  const left = stays.filter((stay) => within(stay.left));
  const flows = left.map((stay) => ((stay.left ?? 0) - stay.entered) / 1000).sort((a, b) => a - b);
  const inside = stays.filter(
    (stay) => stay.entered < to && (stay.left === null || stay.left >= to),
  );
  const weigh = (some: readonly OracleStay[]) =>
    some.reduce((sum, stay) => sum + weightOf(stay), 0);
  return {
    wipStart: insideJustBefore(stays, from),
    wipEnd: insideJustBefore(stays, to),
    wipMean:
      stays.reduce((sum, stay) => sum + weightOf(stay) * overlap(stay, from, to), 0) / (to - from),
    wipPeak: Math.max(...moments.map((at) => insideAt(stays, at))),
    arrivals: weigh(stays.filter((stay) => within(stay.entered))),
    departures: weigh(left),
    flowMeanSeconds: flows.length
      ? flows.reduce((sum, flow) => sum + flow, 0) / flows.length
      : null,
    flowP85Seconds: flows.length ? typeSeven(flows, 0.85) : null,
    ageMeanSeconds: inside.length
      ? inside.reduce((sum, stay) => sum + (to - stay.entered) / 1000, 0) / inside.length
      : null,
  };
}

/** Percentile by type 7 of Hyndman & Fan (1996), American Statistician 50(4), from memory. */
function typeSeven(sorted: readonly number[], share: number): number {
  const rank = share * (sorted.length - 1);
  const low = sorted[Math.floor(rank)] ?? 0;
  const high = sorted[Math.ceil(rank)] ?? low;
  return low + (rank - Math.floor(rank)) * (high - low);
}

export interface OracleRecord {
  job: string;
  area: string;
  arrived: number | null;
  started: number | null;
  finished: number | null;
}

interface Chained extends OracleRecord {
  about: number;
  left: number | null;
  entered: number | null;
  pass: number;
}

/**
 * When each record was entered and left, by the words of the definition: entered is the arrival, else the
 * latest finish of the job before it in order that is not after this start, in the same pass, else the
 * start; a lost finish is the job's next later start.
 *
 * @param records one job's, in the order in which they were told
 */
export function chain(
  records: readonly OracleRecord[],
  settings: { infer: boolean; newPassAfterDays: number },
): Chained[] {
  const about = (each: OracleRecord) => each.started ?? each.arrived ?? each.finished ?? 0;
  const ordered = records
    .map((each, index) => ({ each, index }))
    .sort(
      (one, other) =>
        about(one.each) - about(other.each) ||
        (one.each.finished ?? Infinity) - (other.each.finished ?? Infinity) ||
        one.index - other.index,
    )
    .map(({ each }) => each);
  const chained: Chained[] = [];
  let pass = 1;
  for (const each of ordered) {
    const times = [each.arrived, each.started, each.finished].filter((at) => at !== null);
    const seen = chained.flatMap((before) =>
      [before.arrived, before.started, before.finished].filter((at) => at !== null),
    );
    const idle = seen.length ? Math.min(...times) - Math.max(...seen) : 0;
    if (idle > settings.newPassAfterDays * 86_400_000) pass += 1;
    const laterStarts = ordered
      .filter((other) => other.started !== null && about(other) > about(each))
      .map((other) => other.started as number);
    const lost =
      settings.infer && each.finished === null && laterStarts.length
        ? Math.min(...laterStarts)
        : null;
    const start = each.started ?? each.finished;
    const finishes = chained
      .filter((before) => before.pass === pass && before.left !== null)
      .map((before) => before.left as number)
      .filter((left) => start !== null && left <= start);
    chained.push({
      ...each,
      about: about(each),
      left: each.finished ?? lost,
      pass,
      entered: each.arrived ?? (finishes.length ? Math.max(...finishes) : each.started),
    });
  }
  return chained;
}

/** The stays of an area, and those of a zone of several areas by gaps and islands. */
export function staysInZone(jobs: readonly Chained[][], areas: readonly string[]): OracleStay[] {
  return jobs.flatMap((records) => {
    const stays: OracleStay[] = [];
    let open: Chained[] = [];
    const close = () => {
      if (open.length === 0) return;
      const lefts = open.map((each) => each.left);
      stays.push({
        entered: Math.min(...open.map((each) => each.entered as number)),
        left: lefts.includes(null) ? null : Math.max(...(lefts as number[])),
      });
      open = [];
    };
    for (const each of records.filter((record) => record.entered !== null)) {
      const follows = open.at(-1)?.pass === each.pass || open.length === 0;
      if (!areas.includes(each.area) || !follows) close();
      if (areas.includes(each.area)) {
        open.push(each);
        // An area's stay is one record: a job that is told twice there is there twice.
        if (areas.length === 1) close();
      }
    }
    close();
    return stays;
  });
}
