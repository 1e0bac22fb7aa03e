import type { SeriesPoint, Step } from '../../shared/contracts/figures.ts';
import { stepBorders } from '../../shared/local-time.ts';
import { levelSteps } from '../methods/level-steps.ts';
import { agesByStep, readAgeInside } from './age-inside.ts';
import { readEndingsByStep } from './endings-by-step.ts';
import { readBinnedFlowTimes } from './flow-bins.ts';
import { readFlowTimes } from './flow-times.ts';
import { readLevelBlocks } from './level-blocks.ts';
import { trackKey } from './track-key.ts';
import { measuresOf, stepFigures, unknownFigures } from './step-figures.ts';
import type { FigureZone, Period, SiteReader } from './zone-reader.ts';

/** Up to so many departures percentiles are exact; beyond they are read from bins, and said to be. */
export const exactDepartures = 1_000_000;

export interface Series {
  points: SeriesPoint[];
  partial: boolean;
  approximate: boolean;
}

/**
 * Figures of a zone by local hours, days or ISO weeks that cover the period. Steps that begin at or after
 * the moment up to which the zone's data speak are unknown.
 */
export async function readZoneSeries(
  reader: SiteReader,
  zone: FigureZone,
  step: Step,
  period: Period,
  unit: 'jobs' | 'units',
): Promise<Series> {
  const borders = stepBorders(reader.rules, step, period.from, period.to);
  const whole = { from: borders[0] ?? period.from, to: borders.at(-1) ?? period.to };
  const { inside, inProcess } = measuresOf(zone, unit);
  const tracks = await readLevelBlocks(
    reader,
    [zone.id],
    [inside, inProcess, 'inside_jobs'],
    whole,
    step === 'hour',
  );
  const steps = (measure: string) => {
    const track = tracks.get(trackKey(zone.id, measure));
    return levelSteps(borders, track?.level ?? 0, track?.blocks ?? []);
  };
  const jobSteps = steps('inside_jobs');
  const departures = jobSteps.reduce((sum, each) => sum + each.downs, 0);
  // An hour has few departures, and the bins know days only.
  const approximate = departures > exactDepartures && step !== 'hour';
  const readFlow = approximate ? readBinnedFlowTimes : readFlowTimes;
  const flow = (await readFlow(reader, [zone.id], borders)).get(zone.id) ?? [];
  const ages = agesByStep(
    await readAgeInside(reader, zone.id, whole.from),
    jobSteps.map((each, index) => ({ ...each, flowSum: flow[index]?.flowSum ?? 0 })),
  );
  const endings = await readEndingsByStep(reader, zone.id, borders, unit);
  const [insideSteps, processSteps] = [steps(inside), steps(inProcess)];
  const points = insideSteps.map((insideStep, index) => {
    const [start, end] = [borders[index] ?? 0, borders[index + 1] ?? 0];
    const processStep = processSteps[index];
    const flowStep = flow[index];
    const known = zone.dataUntil !== null && start < zone.dataUntil && processStep && flowStep;
    return {
      start: new Date(start).toISOString(),
      end: new Date(end).toISOString(),
      ...(known
        ? stepFigures(zone, (end - start) / 1000, insideStep, processStep, flowStep)
        : unknownFigures),
      ageMeanSeconds: known ? (ages[index] ?? null) : null,
      scrapped: known ? (endings[index]?.scrapped ?? 0) : null,
      cancelled: known ? (endings[index]?.cancelled ?? 0) : null,
    };
  });
  const partial = zone.dataUntil === null || whole.to > zone.dataUntil;
  return { points, partial, approximate };
}
