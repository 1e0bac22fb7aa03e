import type { ColumnPlan, Delimiter, FileKind } from '../../shared/contracts/plan.ts';
import { dayMs, readLocal, zoneRules } from '../../shared/local-time.ts';
import { AreaRegister } from './area-register.ts';
import type { Detection } from './detect/detect.ts';
import { IntakeFailure } from './failure.ts';
import type { OpenedFile } from './opened-file.ts';
import { EventRow } from './shapes/event-row.ts';
import { JobRow } from './shapes/job-row.ts';
import type { Places } from './shapes/places.ts';
import { RowFrame } from './shapes/row-frame.ts';
import type { RowRules, ShapeReader } from './shapes/shape-reader.ts';
import { StayRow } from './shapes/stay-row.ts';
import { AutoTimeReader, type DateSystem } from './times/auto-time-reader.ts';
import { CellTimeReader } from './times/cell-time-reader.ts';
import { LocalClock } from './times/local-clock.ts';
import { PatternTimeReader } from './times/pattern-time-reader.ts';
import { compileTimePattern } from './times/time-pattern.ts';
import type { TimeReader } from './times/time-reader.ts';

/** How a file is to be read: its plan, complete, with where each column stands. */
export interface Reading {
  plan: ColumnPlan;
  places: Places;
  header: string[];
  /** The line of the header; rows above it are passed over. */
  headerLine: number;
  delimiter: Delimiter | null;
}

/** What is told of the site, the receipt and the file by which rows are judged. */
export interface RowContext {
  receivedAt: Date;
  /** The site's areas by folded spelling. */
  knownAreas: ReadonlyMap<string, number>;
  dateSystem: DateSystem;
  fileKind: FileKind;
}

/** What a file says of itself by which its rows are judged. */
export const ofFile = ({
  dateSystem,
  kind,
}: OpenedFile): Pick<RowContext, 'dateSystem' | 'fileKind'> => ({ dateSystem, fileKind: kind });

/** @throws IntakeFailure where no plan was given and none could be guessed */
export function readingOf(detection: Detection): Reading {
  const { plan, places, header, headerLine, delimiter, missing } = detection;
  if (plan && places) return { plan, places, header, headerLine, delimiter };
  throw new IntakeFailure(
    'column-not-found',
    missing.join(' '),
    'Say in a column plan which column holds what.',
  );
}

/** The rules of a reading, ready to judge row by row. */
export function shapeReaderOf(
  { plan, places, header }: Reading,
  { receivedAt, knownAreas, dateSystem, fileKind }: RowContext,
): { shape: ShapeReader; areas: AreaRegister } {
  const zone = zoneRules(plan.timeZone);
  const areas = new AreaRegister(knownAreas);
  const times = timeReaderOf(plan, dateSystem, fileKind);
  const rules: RowRules = {
    frame: new RowFrame({
      header,
      job: places.job,
      optional: places.optional,
      times,
      decimalSign: plan.decimalSign ?? '.',
      statusWords: plan.statusWords ?? {},
    }),
    times,
    bounds: {
      earliest: readLocal(zone, Date.UTC(1950, 0, 1)).at * 1000,
      latest: (receivedAt.getTime() + dayMs) * 1000,
    },
    areas,
    refuseUnknownAreas: plan.unknownAreas === 'refuse',
  };
  return { shape: shapeOf(plan, places, rules), areas };
}

function shapeOf(plan: ColumnPlan, places: Places, rules: RowRules): ShapeReader {
  switch (places.shape) {
    case 'stay':
      return new StayRow(places, rules);
    case 'event':
      return new EventRow(places, plan.shape === 'event' ? plan.eventWords : {}, rules);
    case 'job':
      return new JobRow(places, rules);
  }
}

function timeReaderOf(plan: ColumnPlan, dateSystem: DateSystem, kind: FileKind): TimeReader {
  const clock = new LocalClock(zoneRules(plan.timeZone));
  if (plan.timeFormat === 'auto') {
    return new AutoTimeReader(clock, plan.dateOrder ?? null, dateSystem);
  }
  const reader = new PatternTimeReader(compileTimePattern(plan.timeFormat), clock);
  return kind === 'workbook' ? new CellTimeReader(reader, new AutoTimeReader(clock, null)) : reader;
}
