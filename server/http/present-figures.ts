import type {
  FloorRow,
  InsideStay,
  Summary,
  DepartedStay,
} from '../../shared/contracts/figures.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import type { DepartureRow } from '../flow/departures-within.ts';
import type { InsideRow } from '../flow/inside-at.ts';
import type { FloorZone } from '../flow/site-floor.ts';
import type { FigureZone, Period } from '../flow/zone-reader.ts';
import type { ZoneSummary } from '../flow/zone-summary.ts';
import type { LevelFigures } from '../methods/level-steps.ts';

const iso = (at: number) => new Date(at).toISOString();
const isoOrNull = (date: Date | null) => date?.toISOString() ?? null;

/** Two sides, counted apart: who is inside at the end, against who was at the start, came and left. */
function books(inside: LevelFigures, wipEnd: number) {
  const { levelStart: wipStart, ups: arrivals, downs: departures } = inside;
  const gap = wipStart + arrivals - departures - wipEnd;
  return { wipStart, arrivals, departures, wipEnd, balance: Math.abs(gap) <= 1e-9 * (1 + wipEnd) };
}

const warmingUp = (zone: FigureZone, period: Period) =>
  zone.warmUntil !== null && period.from < zone.warmUntil;

export function presentSummary(
  asked: { unit: 'jobs' | 'units'; hours: 'clock' | 'working' },
  zone: FigureZone,
  period: Period,
  summary: ZoneSummary,
  serverSeconds: number | null,
): Summary {
  const known = zone.dataUntil !== null;
  const { edges, inside, inProcess, inProcessJobs } = summary;
  return {
    zoneId: zone.id,
    from: iso(period.from),
    to: iso(period.to),
    unit: asked.unit,
    hours: asked.hours,
    ...summary.figures,
    wipEnd: known ? inside.levelEnd : null,
    inProcessEnd: known && zone.hasStarts ? inProcess.levelEnd : null,
    inferredDepartures: summary.inferredDepartures,
    ...summary.endings,
    oldestInsideSeconds: edges.oldest,
    ageMeanSeconds: edges.stillInside > 0 ? edges.ageSum / edges.stillInside : null,
    utilisation:
      serverSeconds === null || serverSeconds === 0 || !zone.hasStarts
        ? null
        : inProcessJobs.integral / serverSeconds,
    books: books(
      inside,
      asked.unit === 'units' && zone.hasQuantities ? edges.unitsStillInside : edges.stillInside,
    ),
    partial: summary.partial,
    approximate: summary.approximate,
    warmingUp: warmingUp(zone, period),
    dataUntil: zone.dataUntil === null ? null : iso(zone.dataUntil),
    littlesLaw: summary.littlesLaw,
    trend: null,
    controlState: null,
  };
}

export function presentFloorRow(zone: Zone, period: Period, row: FloorZone): FloorRow {
  const known = row.zone.dataUntil !== null;
  return {
    zone,
    ...row.figures,
    wipEnd: known ? row.inside.levelEnd : null,
    inProcessEnd: known && row.zone.hasStarts ? row.inProcess.levelEnd : null,
    oldestInsideSeconds: row.oldestInsideSeconds,
    books: books(row.inside, row.wipEnd),
    partial: row.partial,
    warmingUp: warmingUp(row.zone, period),
  };
}

export function presentInside(row: InsideRow): InsideStay {
  return {
    jobKey: row.job_key,
    entered: row.entered.toISOString(),
    started: isoOrNull(row.started),
    left: isoOrNull(row.left_at),
    queueSeconds: row.queue_seconds,
    processSeconds: row.process_seconds,
    ageSeconds: row.age_seconds,
    finishInferred: row.finish_inferred,
    record: { uploadId: row.upload_id, line: row.line },
  };
}

export function presentDeparture(row: DepartureRow): DepartedStay {
  return {
    jobKey: row.job_key,
    entered: row.entered.toISOString(),
    started: isoOrNull(row.started),
    left: row.left_at.toISOString(),
    queueSeconds: row.queue_seconds,
    processSeconds: row.process_seconds,
    flowSeconds: row.flow_seconds,
    finishInferred: row.finish_inferred,
    record: { uploadId: row.upload_id, line: row.line },
  };
}
