import type { Figures } from '../../shared/contracts/figures.ts';
import { stepBorders } from '../../shared/local-time.ts';
import type { LevelFigures } from '../methods/level-steps.ts';
import type { Measure } from '../db/schema/levels.ts';
import { readBinnedFlowTimes } from './flow-bins.ts';
import { noFlowTimes, readFlowTimes } from './flow-times.ts';
import { readLevelsBefore } from './level-before.ts';
import { trackKey } from './track-key.ts';
import { readLevelTotals } from './level-totals.ts';
import { readOldestInside } from './oldest-inside.ts';
import { measuresOf, stepFigures, unknownFigures } from './step-figures.ts';
import type { FigureZone, Period, SiteReader } from './zone-reader.ts';

/** Up to so many departures of all zones together the Floor sorts them; beyond it reads the bins. */
const exactDeparturesOfFloor = 50_000;

export interface FloorZone {
  zone: FigureZone;
  figures: Figures;
  inside: LevelFigures;
  inProcess: LevelFigures;
  /** Level just before the period's end, read apart from what came and left in it. */
  wipEnd: number;
  oldestInsideSeconds: number | null;
  partial: boolean;
}

/**
 * Every zone over a period of whole local hours (it is widened to them). Percentiles come from bins where
 * the period is made of whole days and has many departures; the answer says so.
 */
export async function readSiteFloor(
  reader: SiteReader,
  zones: readonly FigureZone[],
  asked: Period,
  unit: 'jobs' | 'units',
): Promise<{ period: Period; approximate: boolean; rows: FloorZone[] }> {
  const hours = stepBorders(reader.rules, 'hour', asked.from, asked.to);
  const period = { from: hours[0] ?? asked.from, to: hours.at(-1) ?? asked.to };
  const borders = [period.from, period.to];
  const zoneIds = zones.map((zone) => zone.id);
  const wanted = measuresFor(zones, unit);
  const totals = await readLevelTotals(reader, zoneIds, wanted, period);
  const ends = await readLevelsBefore(reader, zoneIds, wanted, period.to);
  const over = (zoneId: number, measure: Measure) => {
    const figures = totals.get(trackKey(zoneId, measure));
    if (!figures) throw new RangeError('Every zone and measure asked for has its totals.');
    return figures;
  };
  const departures = zones.reduce((sum, zone) => sum + over(zone.id, 'inside_jobs').downs, 0);
  const approximate = departures > exactDeparturesOfFloor && isWholeDays(reader, period);
  const readFlow = approximate ? readBinnedFlowTimes : readFlowTimes;
  const flow = await readFlow(reader, zoneIds, borders);
  const oldest = await readOldestInside(reader, zoneIds, period.to);
  const seconds = (period.to - period.from) / 1000;
  const rows = zones.map((zone) => {
    const measures = measuresOf(zone, unit);
    const [inside, inProcess] = [over(zone.id, measures.inside), over(zone.id, measures.inProcess)];
    const flowTimes = flow.get(zone.id)?.[0] ?? noFlowTimes;
    return {
      zone,
      figures:
        zone.dataUntil === null
          ? unknownFigures
          : stepFigures(zone, seconds, inside, inProcess, flowTimes),
      inside,
      inProcess,
      wipEnd: ends.get(trackKey(zone.id, measures.inside)) ?? 0,
      oldestInsideSeconds: oldest.get(zone.id) ?? null,
      partial: zone.dataUntil === null || period.to > zone.dataUntil,
    };
  });
  return { period, approximate, rows };
}

function measuresFor(zones: readonly FigureZone[], unit: 'jobs' | 'units'): Measure[] {
  const measures = new Set<Measure>(['inside_jobs']);
  for (const zone of zones) {
    const { inside, inProcess } = measuresOf(zone, unit);
    measures.add(inside).add(inProcess);
  }
  return [...measures];
}

function isWholeDays({ rules }: SiteReader, period: Period): boolean {
  const startsDay = (at: number) => stepBorders(rules, 'day', at, at + 1)[0] === at;
  return startsDay(period.from) && startsDay(period.to);
}
