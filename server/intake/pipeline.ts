import type { PoolClient } from 'pg';
import type { ColumnPlan, FileKind } from '../../shared/contracts/plan.ts';
import type { RowAccount } from '../../shared/contracts/uploads.ts';
import type { Database } from '../db/client.ts';
import type { AreaRegister } from './area-register.ts';
import { setImmediate } from 'node:timers/promises';
import { decideDateOrder } from './detect/decide-date-order.ts';
import { detect } from './detect/detect.ts';
import { IntakeFailure, stopped } from './failure.ts';
import { openAndRecognise, type KnownPlan } from './detect/recognise-plan.ts';
import type { OpenedFile } from './opened-file.ts';
import { readOriginal } from './original.ts';
import { ofFile, readingOf, shapeReaderOf, type Reading, type RowContext } from './reading.ts';
import { StageReader } from './stage-reader.ts';
import { Stage } from './stage.ts';

export interface Progress {
  /** Rows read so far. */
  rows: number;
  /** Bytes of the file that were read. */
  bytes: number;
}

export interface ReadingInput extends Omit<RowContext, 'dateSystem' | 'fileKind'> {
  organisationId: number;
  siteId: number;
  uploadId: number;
  /** The plan that was asked for, or null to have one guessed. */
  plan: ColumnPlan | null;
  /** Plans of the site, to recognise the file by its header where none was asked for. */
  savedPlans: readonly KnownPlan[];
  site: { timeZone: string };
  /** Connections on which the original is read. */
  db: Database;
  /** Told now and then how far the reading has come; answers whether to go on. */
  onProgress: (progress: Progress) => Promise<boolean>;
}

/** An area that accepted rows of the file name. */
export interface StagedArea {
  /** Its number in `staged_row.area_number`. */
  number: number;
  /** As it is first written in the file. */
  name: string;
  folded: string;
  /** The site's area of that name, or null where there is none yet. */
  areaId: number | null;
  rows: number;
  /** Earliest and latest time of its rows, to the millisecond (rounded outwards). */
  firstAt: Date;
  latestAt: Date;
}

export interface ReadingOutcome {
  /** The plan by which the file was read, complete. */
  plan: ColumnPlan;
  fileKind: FileKind;
  areas: StagedArea[];
  /** Latest accepted time anywhere in the file, rounded up to the millisecond; null without any. */
  latestAt: Date | null;
  /** All rows counted; what the accepted ones mean to the site is not known yet. */
  account: RowAccount;
  header: string[];
}

/**
 * Reads the original of an upload into the temporary tables `staged_row` and `staged_refused` of one
 * connection: bytes, text, rows, checks, COPY. Memory stays the same however long the file is.
 *
 * @param client a connection of the application's role, not within a transaction
 * @throws IntakeFailure with a sentence where the file cannot be read or the reading was stopped
 */
export async function readIntoStage(
  client: PoolClient,
  input: ReadingInput,
): Promise<ReadingOutcome> {
  const open = () => readOriginal(input.db, input);
  const { file, plan } = await openAndRecognise(open, input.plan, input.savedPlans);
  const reading = await prepareReading({ ...input, plan }, file);
  const { shape, areas } = shapeReaderOf(reading, { ...input, ...ofFile(file) });
  const stage = await Stage.open(client, shape.stagedColumns);
  const reader = new StageReader(reading.headerLine, shape, stage);
  try {
    await readRows(file, reading, reader, stage, input.onProgress);
    await stage.close();
  } catch (error) {
    await stage.settle();
    throw error;
  }
  refuseWithoutRows(reader);
  return {
    plan: reading.plan,
    fileKind: file.kind,
    areas: stagedAreas(areas),
    latestAt: latestOf(areas),
    account: reader.tally.account(),
    header: reading.header,
  };
}

/** Finds out how to read the file; where its beginning does not tell day and month apart, the whole does. */
async function prepareReading(input: ReadingInput, file: OpenedFile): Promise<Reading> {
  const detection = detect({ file, plan: input.plan, timeZone: input.site.timeZone });
  const reading = readingOf(detection);
  if (detection.dateOrder !== 'unknown') return reading;
  const dateOrder = await decideDateOrder(reading, file);
  return { ...reading, plan: { ...reading.plan, dateOrder } };
}

/** Progress is told, and a wish to stop heard, each time so much of the file was read. */
const progressBytes = 2_097_152;

async function readRows(
  file: OpenedFile,
  reading: Reading,
  reader: StageReader,
  stage: Stage,
  onProgress: ReadingInput['onProgress'],
): Promise<void> {
  let bytes = 0;
  let told = 0;
  const tell = async (): Promise<void> => {
    told = bytes;
    const goesOn = await onProgress({ rows: reader.tally.rowsRead, bytes });
    if (!goesOn) throw stopped();
  };
  for await (const taken of file.rows(reading, (row) => reader.take(row))) {
    bytes = taken;
    await stage.sendFull();
    // Lets what is on its way move: judging rows never waits by itself.
    await setImmediate();
    if (bytes - told >= progressBytes) await tell();
  }
  await tell();
}

function refuseWithoutRows({ tally }: StageReader): void {
  const { rowsRead, skipped } = tally.account();
  if (rowsRead > skipped) return;
  throw new IntakeFailure(
    'header-only',
    'The file has a header and no rows.',
    'Export it again over a period in which jobs moved, and upload that.',
  );
}

const floorToMs = (micros: number): Date => new Date(Math.floor(micros / 1000));
const ceilToMs = (micros: number): Date => new Date(Math.ceil(micros / 1000));

function stagedAreas({ accepted }: AreaRegister): StagedArea[] {
  return accepted.map(({ number, name, folded, areaId, rows, firstMicros, latestMicros }) => ({
    number,
    name,
    folded,
    areaId,
    rows,
    firstAt: floorToMs(firstMicros),
    latestAt: ceilToMs(latestMicros),
  }));
}

function latestOf({ accepted }: AreaRegister): Date | null {
  const latest = accepted.map(({ latestMicros }) => latestMicros);
  return latest.length === 0 ? null : ceilToMs(Math.max(...latest));
}
