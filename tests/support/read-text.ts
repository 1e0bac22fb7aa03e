import { columnPlanSchema, type ColumnPlan } from '../../shared/contracts/plan.ts';
import { BinaryCopy } from '../../server/intake/binary-copy.ts';
import { decideDateOrder } from '../../server/intake/detect/decide-date-order.ts';
import { detect } from '../../server/intake/detect/detect.ts';
import { openFile } from '../../server/intake/open-file.ts';
import { readingOf, shapeReaderOf } from '../../server/intake/reading.ts';
import { warningsOf } from '../../server/intake/row-account.ts';
import { rawOf } from '../../server/intake/sample.ts';
import type { RowOutcome, ShapeReader } from '../../server/intake/shapes/shape-reader.ts';
import { StageReader } from '../../server/intake/stage-reader.ts';
import type { ScannedRow } from '../../server/intake/text/row-scanner.ts';

/** One row of a text as intake judged it. Times are ISO 8601 in UTC, to the millisecond. */
export interface JudgedRow {
  line: number;
  /** Of a row per job, which of its areas. */
  part: number;
  outcome: 'accepted' | 'skipped' | 'refused';
  reason: string | null;
  detail: string | null;
  warnings: string[];
  raw: string;
  job: string | null;
  area: string | null;
  arrived: string | null;
  started: string | null;
  finished: string | null;
}

export interface ReadTextOptions {
  plan?: { columns?: object } & Partial<Omit<ColumnPlan, 'columns'>> & Record<string, unknown>;
  timeZone?: string;
  receivedAt?: string;
  knownAreas?: string[];
  /** Whether the whole file is asked for its order of day and month where its beginning does not tell it. */
  decidesDateOrder?: boolean;
}

/** Reads a text as intake does, row by row, without a database. */
export async function readText(text: string | Buffer, options: ReadTextOptions = {}) {
  const bytes = Buffer.isBuffer(text) ? text : Buffer.from(text);
  const timeZone = options.timeZone ?? 'UTC';
  const settings = {
    shape: 'stay' as const,
    timeZone,
    timeFormat: 'auto',
    unknownAreas: 'add' as const,
    mode: 'merge' as const,
  };
  const plan = options.plan?.columns
    ? columnPlanSchema.parse({ ...settings, ...options.plan })
    : null;
  // A reading may change the bytes that it is given.
  const open = async function* () {
    await Promise.resolve();
    yield Buffer.from(bytes);
  };
  const file = await openFile(open, plan ?? {});
  const detection = detect({ file, plan, timeZone });
  let reading = readingOf(detection);
  if (options.decidesDateOrder && detection.dateOrder === 'unknown') {
    const dateOrder = await decideDateOrder(reading, file);
    reading = { ...reading, plan: { ...reading.plan, dateOrder } };
  }
  const { shape, areas } = shapeReaderOf(reading, {
    receivedAt: new Date(options.receivedAt ?? '2026-06-01T00:00:00Z'),
    knownAreas: new Map((options.knownAreas ?? []).map((folded, index) => [folded, index + 1])),
    dateSystem: file.dateSystem,
    fileKind: file.kind,
  });
  const rows: JudgedRow[] = [];
  const noted = notedBy(shape, rows);
  const reader = new StageReader(reading.headerLine, noted, {
    rows: new BinaryCopy(65_536),
    refused: new BinaryCopy(65_536),
    sendFull: () => Promise.resolve(),
  });
  const taken = { lines: 0, silent: [] as number[] };
  const take = (row: ScannedRow) => {
    const before = reader.tally.rowsRead;
    reader.take(row);
    taken.lines += rawOf(row).split('\n').length;
    const isCounted = reader.tally.rowsRead > before || row.line === reading.headerLine;
    if (!isCounted) taken.silent.push(row.line);
  };
  for await (const _ of file.rows(reading, take));
  return {
    rows,
    account: reader.tally.account(),
    areas: areas.accepted,
    plan: reading.plan,
    /** How many lines of the text its rows hold, and on which lines rows began that were not counted. */
    taken,
    kind: file.kind,
    encoding: file.settled.encoding,
  };
}

/** The same reader of rows, noting what it judges. */
function notedBy(shape: ShapeReader, rows: JudgedRow[]): ShapeReader {
  let row: ScannedRow;
  const note = (outcome: RowOutcome | null): RowOutcome | null => {
    if (outcome === null) return null;
    const isAccepted = outcome === 'accepted';
    const refusal = outcome === 'refused' ? shape.refusal : null;
    const told = isAccepted ? shape.told() : null;
    rows.push({
      line: row.line,
      part: shape.part,
      outcome,
      reason: refusal?.reason ?? (outcome === 'skipped' ? shape.skipReason : null),
      detail: refusal?.detail ?? null,
      warnings: isAccepted ? warningsOf(shape.warnings) : [],
      raw: rawOf(row),
      job: told?.job ?? null,
      area: told?.area ?? null,
      arrived: iso(told?.arrived),
      started: iso(told?.started),
      finished: iso(told?.finished),
    });
    return outcome;
  };
  return {
    get stagedColumns() {
      return shape.stagedColumns;
    },
    get part() {
      return shape.part;
    },
    get warnings() {
      return shape.warnings;
    },
    get skipReason() {
      return shape.skipReason;
    },
    get refusal() {
      return shape.refusal;
    },
    read(next) {
      row = next;
      return note(shape.read(next)) ?? 'skipped';
    },
    next: () => note(shape.next()),
    write: (copy, line) => shape.write(copy, line),
    told: () => shape.told(),
  };
}

const iso = (micros = NaN): string | null =>
  Number.isNaN(micros) ? null : new Date(Math.floor(micros / 1000)).toISOString();
