import { hourEnd, hourStart, hourStretches } from '../../shared/local-time.ts';
import { levelSteps, type LevelFigures } from '../methods/level-steps.ts';
import type { Measure } from '../db/schema/levels.ts';
import { readLevelsBefore } from './level-before.ts';
import { readLevelBlocks } from './level-blocks.ts';
import { trackKey } from './track-key.ts';
import { readLevelChanges } from './level-changes.ts';
import type { Period, SiteReader } from './zone-reader.ts';

/**
 * One level over any period, exactly: whole hours and days from their sums, the cut hours at the edges
 * from the stays.
 */
export async function readLevelOver(
  reader: SiteReader,
  zoneId: number,
  measure: Measure,
  period: Period,
): Promise<LevelFigures> {
  const stretches = hourStretches(reader.rules, period.from - 1, period.to + 1);
  const firstHour = hourStart(stretches, period.from);
  const lastHour = hourStart(stretches, period.to);
  const wholeFrom = firstHour === period.from ? firstHour : hourEnd(stretches, firstHour);
  const whole = { from: wholeFrom, to: Math.max(wholeFrom, lastHour) };
  const cutStart = { from: firstHour, to: Math.min(wholeFrom, period.to) };
  const cutEnd = { from: whole.to, to: period.to };
  const track =
    whole.from < whole.to
      ? (await readLevelBlocks(reader, [zoneId], [measure], whole)).get(trackKey(zoneId, measure))
      : undefined;
  const base =
    track && firstHour === whole.from
      ? track.level
      : await readBase(reader, zoneId, measure, firstHour);
  const before = await readLevelChanges(reader, zoneId, measure, {
    from: cutStart.from,
    to: cutStart.from === wholeFrom ? cutStart.from : period.from,
  });
  const blocks = [
    ...(wholeFrom === period.from
      ? []
      : await readLevelChanges(reader, zoneId, measure, { from: period.from, to: cutStart.to })),
    ...(track?.blocks ?? []),
    ...(await readLevelChanges(reader, zoneId, measure, cutEnd)),
  ];
  const level = before.reduce((sum, change) => sum + change.ups - change.downs, base);
  const [figures] = levelSteps([period.from, period.to], level, blocks);
  if (!figures) throw new RangeError('A period must have a length.');
  return figures;
}

/** The number inside at a moment, those who came at that very moment included. */
export async function readLevelAt(
  reader: SiteReader,
  zoneId: number,
  measure: Measure,
  at: number,
): Promise<number> {
  const hour = hourStart(hourStretches(reader.rules, at - 1, at + 1), at);
  const base = await readBase(reader, zoneId, measure, hour);
  const changes = await readLevelChanges(reader, zoneId, measure, { from: hour, to: at }, true);
  return changes.reduce((sum, change) => sum + change.ups - change.downs, base);
}

async function readBase(
  reader: SiteReader,
  zoneId: number,
  measure: Measure,
  hour: number,
): Promise<number> {
  const levels = await readLevelsBefore(reader, [zoneId], [measure], hour);
  return levels.get(trackKey(zoneId, measure)) ?? 0;
}
