import { shortened } from './shortened.ts';

/** One area of the section: what is in it, and how it is named. Amounts in jobs or units. */
export interface Basin {
  id: number;
  name: string;
  /** Place in the flow; areas that work side by side share one. */
  place: number;
  level: number;
  /** Of the level, in process; null where waiting and in process cannot be told apart. */
  inProcess: number | null;
  mean: number;
  peak: number;
  cap: number | null;
  /** What leaves, a day. */
  perDay: number;
}

export interface DrawnBasin extends Basin {
  x: number;
  width: number;
  /** Top of the basin's walls, and its floor. */
  top: number;
  floor: number;
  /** Places from the top of the drawing. */
  levelY: number;
  inProcessY: number;
  meanY: number;
  peakY: number;
  capY: number | null;
  /** The name as far as it fits above the basin. */
  label: string;
}

export interface DrawnArrow {
  x: number;
  width: number;
  y: number;
  perDay: number;
  /** The arrow leads to the next row. */
  wraps: boolean;
}

export interface Section {
  basins: DrawnBasin[];
  arrows: DrawnArrow[];
  height: number;
  /** Height of one row, from a label's top to the next one's. */
  rowHeight: number;
  compact: boolean;
}

interface Measures {
  /** Widths of a basin with what is between it and the next: at least, and at most. */
  least: number;
  most: number;
  arrow: number;
  depth: number;
  /** Room above the walls for the name, and below the floor for what stands there. */
  above: number;
  below: number;
}

const roomy: Measures = { least: 124, most: 200, arrow: 46, depth: 176, above: 26, below: 104 };
const close: Measures = { least: 92, most: 140, arrow: 34, depth: 96, above: 24, below: 44 };
/** Beyond so many places basins are drawn small, so that forty areas still read. */
const mostRoomy = 16;
/** Widths of a character of the names, in the face of the labels. */
const characterWidth = { roomy: 7.8, compact: 7.2 };
/** What a name may take beyond its basin, where nothing stands beside it. */
const nameOverhang = 22;
const gapBetweenShared = 8;

/** How many places stand beside each other: as many as fit, in rows of the same length. */
function placesInRow(places: number, width: number, { least }: Measures): number {
  const most = Math.max(1, Math.floor(width / least));
  const rows = Math.max(1, Math.ceil(places / most));
  return Math.max(1, Math.ceil(places / rows));
}

/**
 * Lays out the section of a site: basins in order of flow, in as many rows as the width asks for, on one
 * scale or each on its own.
 *
 * @param basins in order of flow
 * @param scale `shared`: heights compare across areas; `own`: each basin is filled by its own peak
 */
export function layoutSection(
  basins: readonly Basin[],
  width: number,
  scale: 'shared' | 'own',
): Section {
  const places = groupByPlace(basins);
  const compact = places.length > mostRoomy;
  const measures = compact ? close : roomy;
  const perRow = placesInRow(places.length, width, measures);
  const pitch = Math.min(width / perRow, measures.most);
  const basinWidth = pitch - measures.arrow;
  const rowHeight = measures.above + measures.depth + measures.below;
  const tallest = Math.max(1, ...basins.map(reach));
  const section: Section = {
    basins: [],
    arrows: [],
    height: rowHeight * Math.max(1, Math.ceil(places.length / perRow)),
    rowHeight,
    compact,
  };
  for (const [index, shared] of places.entries()) {
    const [row, column] = [Math.floor(index / perRow), index % perRow];
    const top = row * rowHeight + measures.above;
    const x = column * pitch;
    const share = (basinWidth - gapBetweenShared * (shared.length - 1)) / shared.length;
    for (const [beside, basin] of shared.entries())
      section.basins.push(
        drawBasin(basin, {
          x: x + beside * (share + gapBetweenShared),
          width: share,
          top,
          depth: measures.depth,
          most: scale === 'shared' ? tallest : Math.max(1, reach(basin)),
          characters: Math.floor(
            (share + (shared.length > 1 ? 0 : nameOverhang)) /
              characterWidth[compact ? 'compact' : 'roomy'],
          ),
        }),
      );
    if (index < places.length - 1)
      section.arrows.push({
        x: x + basinWidth,
        width: pitch - basinWidth,
        y: top + measures.depth,
        perDay: shared.reduce((sum, basin) => sum + basin.perDay, 0),
        wraps: column === perRow - 1,
      });
  }
  return section;
}

/** The highest thing that is drawn of a basin. */
const reach = ({ level, peak, mean, cap }: Basin): number => Math.max(level, peak, mean, cap ?? 0);

function groupByPlace(basins: readonly Basin[]): Basin[][] {
  const places: Basin[][] = [];
  for (const basin of basins) {
    const last = places.at(-1);
    if (last?.[0]?.place === basin.place) last.push(basin);
    else places.push([basin]);
  }
  return places;
}

/** Share of a basin's depth that the tallest of all may take: the rest is air. */
const fullShare = 0.92;

function drawBasin(
  basin: Basin,
  at: { x: number; width: number; top: number; depth: number; most: number; characters: number },
): DrawnBasin {
  const floor = at.top + at.depth;
  const y = (amount: number) => floor - (amount / at.most) * at.depth * fullShare;
  return {
    ...basin,
    x: at.x,
    width: at.width,
    top: at.top,
    floor,
    levelY: y(basin.level),
    inProcessY: y(basin.inProcess ?? 0),
    meanY: y(basin.mean),
    peakY: y(basin.peak),
    capY: basin.cap === null ? null : y(basin.cap),
    label: shortened(basin.name, at.characters),
  };
}
