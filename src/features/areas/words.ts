import type { Area, AreaMove, Areas } from '../../../shared/contracts/areas.ts';
import { formatDay, formatMoment, listed, plural } from '../../lib/format.ts';

const quoted = (name: string): string => `“${name}”`;

/** The areas that are shown: those merged into another are under that one. */
export const shownAreas = ({ areas }: Areas): Area[] =>
  areas.filter((area) => area.mergedInto === null);

/** What the areas of a site are, worst first. */
export function areasSentence(all: Areas, timeZone: string): string {
  const shown = shownAreas(all);
  const [first] = shown;
  const last = shown.at(-1);
  if (!first || !last) return 'There are no areas yet.';
  const passes =
    first === last
      ? `Work passes one area, ${first.name}`
      : `Work passes ${plural(shown.length, 'area')}, from ${first.name} to ${last.name}`;
  return [...pairClause(all), `${passes}; ${moveClause(all.moves, timeZone)}.`].join(' ');
}

function pairClause({ areas, likelyPairs }: Areas): string[] {
  const [pair] = likelyPairs;
  if (!pair) return [];
  if (likelyPairs.length > 1)
    return [`${likelyPairs.length} pairs of areas may be one area each, written in two ways.`];
  const name = (id: number) => quoted(areas.find((area) => area.id === id)?.name ?? '');
  return [
    `${name(pair.areaId)} and ${name(pair.targetAreaId)} may be one area, written in two ways.`,
  ];
}

function moveClause(moves: readonly AreaMove[], timeZone: string): string {
  const [move] = moves;
  if (!move) return 'each row counts for the area that its file names';
  if (moves.length > 1) return `${moves.length} moves between names are in force`;
  return moveInWords(move, timeZone);
}

/** A move in words: “Repair Bench 1” counts as “Repair bench” from 3 Aug 2026 on. */
export function moveInWords(
  { areaName, targetAreaName, from }: Pick<AreaMove, 'areaName' | 'targetAreaName' | 'from'>,
  timeZone: string,
): string {
  const counts = `${quoted(areaName)} counts as ${quoted(targetAreaName)}`;
  return from === null ? counts : `${counts} from ${momentInWords(from, timeZone)} on`;
}

/** The day, with the time where it is not the day's beginning. */
function momentInWords(at: string, timeZone: string): string {
  const moment = formatMoment(at, timeZone);
  return moment.endsWith(', 00:00') ? formatDay(at, timeZone) : moment;
}

/** What a move that is being made will do, sentence by sentence. */
export function consequences({
  area,
  target,
  from,
  moves,
  loops,
  timeZone,
}: {
  area: Area;
  target: Area;
  from: string | null;
  moves: readonly AreaMove[];
  loops: readonly { name: string; areaIds: readonly number[] }[];
  timeZone: string;
}): string[] {
  const [name, other] = [quoted(area.name), quoted(target.name)];
  const undo = 'Nothing is lost: you can undo it.';
  if (from !== null) {
    const day = momentInWords(from, timeZone);
    const left = loops.filter(
      ({ areaIds }) => areaIds.includes(area.id) && !areaIds.includes(target.id),
    );
    return [
      `Rows of ${name} that start on ${day} or later will count as ${other}; where no start is told, their arrival decides, else their finish. Earlier rows stay as they are.`,
      ...left.map(
        (loop) =>
          `The loop ${quoted(loop.name)} names ${name} and not ${other}: it loses these rows.`,
      ),
      undo,
    ];
  }
  const dated = moves.filter((move) => move.areaId === area.id);
  return [
    `${plural(area.toldRows - movedRows(dated), 'row')} of ${name} will count as ${other}, and so will those of later uploads. ${name} is then no longer shown by itself.`,
    ...(dated.length > 0
      ? [`Rows of ${name} that are moved from a day on stay where they are.`]
      : []),
    ...(area.servers === null
      ? []
      : [`Its ${plural(area.servers, 'server')} will not be added to those of ${other}.`]),
    undo,
  ];
}

const movedRows = (moves: readonly AreaMove[]): number =>
  moves.reduce((sum, move) => sum + move.rows, 0);

/** What taking a move back will do. */
export const undoing = ({ areaName, from, rows }: AreaMove): string =>
  `${plural(rows, 'row')} will count for ${quoted(areaName)} again${from === null ? ', which is shown by itself as before' : ''}. Nothing is lost: you can move them again.`;

/** How files write an area: its own spellings, then those of areas merged into it. */
export function spellingsInWords(area: Area, { areas }: Areas): string {
  const merged = areas.filter((each) => each.mergedInto === area.id);
  const also = merged.flatMap((each) => each.spellings);
  const own = listed(area.spellings.map(quoted));
  return also.length === 0 ? own : `${own}; merged: ${listed(also.map(quoted))}`;
}
