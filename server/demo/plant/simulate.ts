import {
  areas,
  arrivalsPerDay,
  calibrationRests,
  dayShift,
  failingShare,
  lostWeek,
  runUp,
  slowBench,
  span,
  type PlantArea,
} from './plan.ts';
import { seededRandom, type Random } from './random.ts';

/** One visit of a job to an area, in milliseconds rounded to minutes; without an end it was never told. */
export interface Visit {
  job: string;
  family: string;
  /** When the job is due, by day. */
  due: number;
  area: string;
  arrived: number;
  started: number;
  finished: number | null;
}

interface Job {
  key: string;
  family: string;
  due: number;
  /** Places of the areas that it has still to visit. */
  way: number[];
}

interface Arrival {
  at: number;
  job: Job;
}

const seed = 20_260_601;
const day = 86_400_000;
const minute = 60_000;
const families = ['GAUGE', 'METER', 'PROBE', 'SCALE'];
const firstNumber = 12_001;
/** Process times vary little: a coefficient of variation of a quarter. */
const processShape = 16;

const calibration = areas.findIndex(({ name }) => name === 'Calibration');
const toTheMinute = (at: number) => Math.round(at / minute) * minute;

/**
 * Runs the plant: jobs come spread over each day, take their turn at every area in order, and go on when
 * they are done. The same visits every time.
 *
 * @returns every visit, in order of arrival
 */
export function simulatePlant(): Visit[] {
  const random = seededRandom(seed);
  const free = areas.map(({ servers }) => Array.from({ length: servers }, () => -Infinity));
  const waiting = arrivals(random);
  const visits: Visit[] = [];
  let dispatched = 0;
  for (let next = waiting.shift(); next; next = waiting.shift()) {
    const { job, at } = next;
    const [place = 0, ...onward] = job.way;
    const area: PlantArea | undefined = areas[place];
    const servers = free[place];
    if (!area || !servers) continue;
    const started = toTheMinute(startOf(area, servers, at));
    const finished = toTheMinute(started + processTime(area, started, random));
    servers[servers.indexOf(Math.min(...servers))] = finished;
    const arrived = area.gated ? started : toTheMinute(at);
    const lost = isLost(area, finished) && dispatched++ % lostWeek.everyNth === 0;
    const { key, family, due } = job;
    visits.push({
      ...{ job: key, family, due, area: area.name, arrived, started },
      finished: lost ? null : finished,
    });
    if (onward.length > 0) insert(waiting, { at: finished, job: { ...job, way: onward } });
  }
  return visits.sort((one, other) => one.arrived - other.arrived || compare(one.job, other.job));
}

const compare = (one: string, other: string) => (one < other ? -1 : one > other ? 1 : 0);

function arrivals(random: Random): Arrival[] {
  const found: Arrival[] = [];
  for (let from = span.from - runUp; from < span.until; from += day) {
    const weekday = new Date(from + day / 2).getUTCDay();
    const many = weekday === 0 || weekday === 6 ? arrivalsPerDay.weekend : arrivalsPerDay.working;
    // One in each equal part of the day, anywhere within it.
    for (let part = 0; part < many; part++)
      found.push({
        at: from + timeOfDay((part + random.next()) / many),
        job: makeJob(found.length, from, random),
      });
  }
  return found;
}

/** The time of day at which a share of the day's jobs has come. */
function timeOfDay(share: number): number {
  const length = dayShift.until - dayShift.from;
  if (share < dayShift.share) return dayShift.from + (share / dayShift.share) * length;
  const later = ((share - dayShift.share) / (1 - dayShift.share)) * (day - length);
  return dayShift.until + later;
}

function makeJob(index: number, today: number, random: Random): Job {
  const fails = random.next() < failingShare;
  const way = areas.map((_, place) => place);
  if (fails) way.splice(calibration + 2, 0, calibration, calibration + 1);
  return {
    key: `LW-${firstNumber + index}`,
    family: families[Math.floor(random.next() * families.length)] ?? '',
    due: today + Math.round(4 + random.next() * 4) * day,
    way,
  };
}

/** When the next free server takes a job up; calibration takes none up while it rests. */
function startOf(area: PlantArea, free: readonly number[], arrived: number): number {
  const started = Math.max(arrived, Math.min(...free));
  if (area.name !== 'Calibration') return started;
  const rest = calibrationRests.find(({ from, until }) => started >= from && started < until);
  return rest ? rest.until : started;
}

function processTime(area: PlantArea, started: number, random: Random): number {
  const slower = area.name === 'Repair bench' && started >= slowBench.from ? slowBench.factor : 1;
  return Math.max(minute, random.around(area.processMs * slower, processShape));
}

const isLost = (area: PlantArea, finished: number) =>
  area.name === 'Dispatch' && finished >= lostWeek.from && finished < lostWeek.until;

/** Puts an arrival into its place among those that wait, which are in order of time. */
function insert(waiting: Arrival[], arrival: Arrival): void {
  let [low, high] = [0, waiting.length];
  while (low < high) {
    const middle = (low + high) >> 1;
    if ((waiting[middle]?.at ?? 0) <= arrival.at) low = middle + 1;
    else high = middle;
  }
  waiting.splice(low, 0, arrival);
}
