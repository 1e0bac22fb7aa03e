import { rowReasonSentence, type SkipReason } from '../../../shared/row-reasons.ts';
import type { WrittenArea } from '../area-register.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import { Cell } from '../cell.ts';
import type { Refusal } from '../refusal.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import { refuseUnknownArea } from './area-cell.ts';
import type { JobPlaces } from './places.ts';
import type { RowOutcome, RowRules, ShapeReader, Told } from './shape-reader.ts';
import { StayTimes } from './stay-times.ts';

/** One area's columns in a row per job. */
interface AreaColumns {
  cell: Cell;
  written: WrittenArea;
  times: StayTimes;
}

/** Stands between a row's own id and the area, so that each of its stays has an id of its own. */
const unitSeparator = '\u001F';

/** Reads rows that tell a whole job: each area with any time filled is a row of the account. */
export class JobRow implements ShapeReader {
  readonly stagedColumns: readonly string[];
  warnings = 0;
  refusal: Refusal | null = null;
  readonly #rules: RowRules;
  readonly #areas: readonly AreaColumns[];
  #row: ScannedRow | null = null;
  #at = 0;

  constructor(places: JobPlaces, rules: RowRules) {
    this.#rules = rules;
    this.#areas = places.areas.map(({ area, times }) => {
      const cell = new Cell().setText(area);
      const written = rules.areas.find(cell, cell.start, cell.end);
      if (written === null) throw new Error(`The area ${area} is no text.`);
      return { cell, written, times: new StayTimes(times, rules.times, rules.bounds) };
    });
    const { frame } = rules;
    this.stagedColumns = [
      ...['line', 'part', 'job_key', 'area_number', 'arrived', 'started', 'finished'],
      ...(frame.tellsEndings ? ['ending'] : []),
      ...frame.optional.stagedColumns,
    ];
  }

  get skipReason(): SkipReason {
    return this.#rules.frame.skipReason;
  }

  /** The place of the area among those of the plan, from 1; 0 while the row as a whole is spoken of. */
  get part(): number {
    return this.#at;
  }

  read(row: ScannedRow): RowOutcome {
    const { frame } = this.#rules;
    this.#at = 0;
    this.#row = null;
    if (frame.skips(row)) return 'skipped';
    this.refusal = frame.readJob(row) ?? frame.readRest(row);
    if (this.refusal !== null) return 'refused';
    this.#row = row;
    const first = this.next();
    if (first !== null) return first;
    this.#at = 0;
    this.refusal = { reason: 'no-time', detail: rowReasonSentence('no-time') };
    return 'refused';
  }

  next(): RowOutcome | null {
    const row = this.#row;
    if (row === null) return null;
    while (this.#at < this.#areas.length) {
      const area = this.#areas[this.#at] as AreaColumns;
      this.#at += 1;
      if (area.times.isFilled(row)) return this.#judge(area, row);
    }
    this.#row = null;
    return null;
  }

  #judge({ cell, written, times }: AreaColumns, row: ScannedRow): RowOutcome {
    const { frame, areas, refuseUnknownAreas } = this.#rules;
    const isUnknown = refuseUnknownAreas && written.area.areaId === null;
    this.refusal = isUnknown ? refuseUnknownArea(cell) : times.read(row);
    if (this.refusal !== null) return 'refused';
    this.warnings = times.warnings | times.missing | frame.optional.warnings;
    areas.accept(written.area, times.first, times.latest);
    return 'accepted';
  }

  get #current(): AreaColumns {
    return this.#areas[this.#at - 1] as AreaColumns;
  }

  write(copy: BinaryCopy, line: number): void {
    const { frame } = this.#rules;
    const { written, times } = this.#current;
    copy.beginRow(this.stagedColumns.length);
    copy.int4(line);
    copy.int2(this.#at);
    copy.bytes(frame.job.bytes, frame.job.start, frame.job.end);
    copy.int4(written.area.number);
    for (let index = 0; index < 3; index++) copy.timestamp(times.of(index));
    if (frame.tellsEndings) copy.textOrNull(frame.ending);
    frame.optional.write(copy, `${unitSeparator}${written.area.folded}`);
  }

  told(): Told {
    const { written, times } = this.#current;
    return { job: this.#rules.frame.job.text(), area: written.area.name, ...times.told() };
  }
}
