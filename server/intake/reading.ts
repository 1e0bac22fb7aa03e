import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { dayMs, readLocal, zoneRules } from '../../shared/local-time.ts';
import { AreaRegister } from './area-register.ts';
import type { Detection } from './detect.ts';
import { IntakeFailure } from './failure.ts';
import { StayRow } from './shapes/stay-row.ts';
import type { StayColumnPlaces } from './shapes/stay-columns.ts';
import { AutoTimeReader } from './times/auto-time-reader.ts';
import { LocalClock } from './times/local-clock.ts';
import { PatternTimeReader } from './times/pattern-time-reader.ts';
import { compileTimePattern } from './times/time-pattern.ts';
import type { TimeReader } from './times/time-reader.ts';

/** How a file is to be read: its plan, complete, with where each column stands. */
export interface Reading {
  plan: ColumnPlan;
  places: StayColumnPlaces;
  header: string[];
  delimiter: string;
}

/** What is told of the site and the receipt by which rows are judged. */
export interface RowContext {
  receivedAt: Date;
  /** The site's areas by folded spelling. */
  knownAreas: ReadonlyMap<string, number>;
}

/** @throws IntakeFailure where no plan was given and none could be guessed */
export function readingOf(detection: Detection): Reading {
  const { plan, places, header, delimiter, missing } = detection;
  if (plan && places) return { plan, places, header, delimiter };
  throw new IntakeFailure(
    'column-not-found',
    missing.join(' '),
    'Say in a column plan which column holds what.',
  );
}

/** The rules of a reading, ready to judge row by row. */
export function stayRowOf(
  { plan, places, header }: Reading,
  { receivedAt, knownAreas }: RowContext,
): { stayRow: StayRow; areas: AreaRegister } {
  const rules = zoneRules(plan.timeZone);
  const areas = new AreaRegister(knownAreas);
  const stayRow = new StayRow({
    header,
    places,
    times: timeReaderOf(plan),
    bounds: {
      earliest: readLocal(rules, Date.UTC(1950, 0, 1)).at * 1000,
      latest: (receivedAt.getTime() + dayMs) * 1000,
    },
    areas,
    refuseUnknownAreas: plan.unknownAreas === 'refuse',
  });
  return { stayRow, areas };
}

function timeReaderOf(plan: ColumnPlan): TimeReader {
  const clock = new LocalClock(zoneRules(plan.timeZone));
  return plan.timeFormat === 'auto'
    ? new AutoTimeReader(clock, plan.dateOrder ?? null)
    : new PatternTimeReader(compileTimePattern(plan.timeFormat), clock);
}
