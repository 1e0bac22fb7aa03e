import { dayMs, stepBorders } from '../../shared/local-time.ts';
import { levelSteps } from '../methods/level-steps.ts';
import { readLevelBlocks } from './level-blocks.ts';
import { measuresOf } from './step-figures.ts';
import { trackKey } from './track-key.ts';
import type { FigureZone, Period, SiteReader } from './zone-reader.ts';

/** Up to so many days the steps are days, beyond they are weeks: a small picture holds no more. */
const mostDays = 100;

export interface FloorLevels {
  borders: number[];
  zones: { zoneId: number; wipMean: (number | null)[] }[];
}

/**
 * Mean level of every zone by local day, or by ISO week where the period is long: the small pictures of the
 * Floor. Steps that begin after what a zone's data speak for are unknown.
 */
export async function readFloorLevels(
  reader: SiteReader,
  zones: readonly FigureZone[],
  period: Period,
  unit: 'jobs' | 'units',
): Promise<FloorLevels> {
  const step = period.to - period.from <= mostDays * dayMs ? 'day' : 'week';
  const borders = stepBorders(reader.rules, step, period.from, period.to);
  const whole = { from: borders[0] ?? period.from, to: borders.at(-1) ?? period.to };
  const measures = [...new Set(zones.map((zone) => measuresOf(zone, unit).inside))];
  const ids = zones.map((zone) => zone.id);
  const tracks = await readLevelBlocks(reader, ids, measures, whole);
  return {
    borders,
    zones: zones.map((zone) => {
      const track = tracks.get(trackKey(zone.id, measuresOf(zone, unit).inside));
      const steps = levelSteps(borders, track?.level ?? 0, track?.blocks ?? []);
      return {
        zoneId: zone.id,
        wipMean: steps.map(({ integral }, index) => {
          const [start, end] = [borders[index] ?? 0, borders[index + 1] ?? 0];
          const known = zone.dataUntil !== null && start < zone.dataUntil;
          return known ? integral / ((end - start) / 1000) : null;
        }),
      };
    }),
  };
}
