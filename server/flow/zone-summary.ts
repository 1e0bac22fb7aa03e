import type { Figures, LittlesLaw } from '../../shared/contracts/figures.ts';
import { stepBorders } from '../../shared/local-time.ts';
import type { LevelFigures } from '../methods/level-steps.ts';
import { littlesLaw } from '../methods/littles-law.ts';
import { noEndings, readEndingsByStep, type Endings } from './endings-by-step.ts';
import { readBinnedFlowTimes } from './flow-bins.ts';
import { noFlowTimes, readFlowTimes, type FlowTimes } from './flow-times.ts';
import { readLevelOver } from './level-over.ts';
import { measuresOf, stepFigures, unknownFigures } from './step-figures.ts';
import { readWindowEdges, type WindowEdges } from './window-edges.ts';
import type { FigureZone, Period, SiteReader } from './zone-reader.ts';
import { exactDepartures } from './zone-series.ts';

export interface ZoneSummary {
  figures: Figures;
  /** Levels in the unit asked for. */
  inside: LevelFigures;
  inProcess: LevelFigures;
  /** Number in process, in jobs: servers serve jobs. */
  inProcessJobs: LevelFigures;
  edges: WindowEdges;
  inferredDepartures: number;
  endings: Endings;
  littlesLaw: LittlesLaw;
  partial: boolean;
  approximate: boolean;
}

/**
 * Figures of a zone over exactly the period, with both routes of Little's Law: L from the levels, W and
 * the edges from the stays.
 */
export async function readZoneSummary(
  reader: SiteReader,
  zone: FigureZone,
  period: Period,
  unit: 'jobs' | 'units',
): Promise<ZoneSummary> {
  const seconds = (period.to - period.from) / 1000;
  const measures = measuresOf(zone, unit);
  const inside = await readLevelOver(reader, zone.id, measures.inside, period);
  const inProcess = await readLevelOver(reader, zone.id, measures.inProcess, period);
  const insideJobs =
    measures.inside === 'inside_jobs'
      ? inside
      : await readLevelOver(reader, zone.id, 'inside_jobs', period);
  const inProcessJobs =
    measures.inProcess === 'in_process_jobs'
      ? inProcess
      : await readLevelOver(reader, zone.id, 'in_process_jobs', period);
  const edges = await readWindowEdges(reader, zone.id, period);
  const { flow, approximate } = await readFlow(reader, zone, period, edges.departures);
  const endings = await readEndingsByStep(reader, zone.id, [period.from, period.to], unit);
  return {
    figures:
      zone.dataUntil === null
        ? unknownFigures
        : stepFigures(zone, seconds, inside, inProcess, flow),
    inside,
    inProcess,
    inProcessJobs,
    edges,
    inferredDepartures: flow.inferred,
    endings: endings[0] ?? noEndings,
    littlesLaw: littlesLaw({
      seconds,
      levelIntegral: insideJobs.integral,
      arrivals: edges.arrivals,
      departures: edges.departures,
      flowSum: edges.flowSum,
      beforeSum: edges.beforeSum,
      stillInsideSum: edges.stillInsideSum,
    }),
    partial: zone.dataUntil === null || period.to > zone.dataUntil,
    approximate,
  };
}

/** Exact, unless there are too many departures to sort; bins then speak for the whole days that cover the period. */
async function readFlow(
  reader: SiteReader,
  zone: FigureZone,
  period: Period,
  departures: number,
): Promise<{ flow: FlowTimes; approximate: boolean }> {
  const approximate = departures > exactDepartures;
  const days = stepBorders(reader.rules, 'day', period.from, period.to);
  const found = approximate
    ? await readBinnedFlowTimes(reader, [zone.id], [days[0] ?? 0, days.at(-1) ?? 0])
    : await readFlowTimes(reader, [zone.id], [period.from, period.to]);
  return { flow: found.get(zone.id)?.[0] ?? noFlowTimes, approximate };
}
