import type { Figures } from '../../shared/contracts/figures.ts';
import type { LevelFigures } from '../methods/level-steps.ts';
import type { FlowTimes } from './flow-times.ts';
import type { Measure } from '../db/schema/levels.ts';
import type { FigureZone } from './zone-reader.ts';

/** The two levels of a zone in a unit: inside, and of these in process. Units are jobs where none are told. */
export function measuresOf(
  zone: FigureZone,
  unit: 'jobs' | 'units',
): { inside: Measure; inProcess: Measure } {
  return unit === 'units' && zone.hasQuantities
    ? { inside: 'inside_units', inProcess: 'in_process_units' }
    : { inside: 'inside_jobs', inProcess: 'in_process_jobs' };
}

/** The figures of one step from its levels and its flow times. */
export function stepFigures(
  zone: FigureZone,
  seconds: number,
  inside: LevelFigures,
  inProcess: LevelFigures,
  flow: FlowTimes,
): Figures {
  const [p50 = null, p85 = null, p95 = null] = flow.percentiles;
  return {
    wipStart: inside.levelStart,
    wipMean: inside.integral / seconds,
    wipPeak: inside.peak,
    arrivals: inside.ups,
    departures: inside.downs,
    throughputPerHour: (inside.downs / seconds) * 3600,
    flowMeanSeconds: flow.flowMean,
    flowP50Seconds: p50,
    flowP85Seconds: p85,
    flowP95Seconds: p95,
    queueMeanSeconds: flow.queueMean,
    processMeanSeconds: flow.processMean,
    inProcessMean: zone.hasStarts ? inProcess.integral / seconds : null,
  };
}

/** What is answered where the data do not speak. */
export const unknownFigures: Figures = {
  wipStart: null,
  wipMean: null,
  wipPeak: null,
  arrivals: null,
  departures: null,
  throughputPerHour: null,
  flowMeanSeconds: null,
  flowP50Seconds: null,
  flowP85Seconds: null,
  flowP95Seconds: null,
  queueMeanSeconds: null,
  processMeanSeconds: null,
  inProcessMean: null,
};
