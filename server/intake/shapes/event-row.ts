import type { EventKind, EventPlan, TimeColumn } from '../../../shared/contracts/plan.ts';
import { rowReasonSentence, type SkipReason } from '../../../shared/row-reasons.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import { Cell } from '../cell.ts';
import { quoteCell, type Refusal } from '../refusal.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import { AreaCell } from './area-cell.ts';
import type { EventPlaces } from './places.ts';
import type { RowOutcome, RowRules, ShapeReader, Told } from './shape-reader.ts';
import { StayTimes } from './stay-times.ts';
import { WordTable } from './word-table.ts';

const columns: readonly TimeColumn[] = ['arrived', 'started', 'finished'];

/** Reads rows that tell one event each: the job arrived, started or finished. Pairing them is not its affair. */
export class EventRow implements ShapeReader {
  readonly part = 0;
  readonly stagedColumns: readonly string[];
  warnings = 0;
  refusal: Refusal | null = null;
  readonly #rules: RowRules;
  readonly #area: AreaCell;
  readonly #event = new Cell();
  readonly #eventPlace: number;
  readonly #words: WordTable<EventKind>;
  readonly #time: StayTimes;
  #kind: EventKind = 'started';
  #isIgnored = false;

  constructor(places: EventPlaces, eventWords: EventPlan['eventWords'], rules: RowRules) {
    this.#rules = rules;
    this.#area = new AreaCell(places.area, rules.areas, rules.refuseUnknownAreas);
    this.#eventPlace = places.event;
    this.#words = new WordTable<EventKind>(eventWords ?? {});
    this.#time = new StayTimes({ started: places.time }, rules.times, rules.bounds, 'time');
    this.stagedColumns = [
      ...['line', 'job_key', 'area_number', 'event', 'arrived', 'started', 'finished'],
      ...['second_reading', 'ending'],
      ...rules.frame.optional.stagedColumns,
    ];
  }

  get skipReason(): SkipReason {
    return this.#isIgnored ? 'ignored-event' : this.#rules.frame.skipReason;
  }

  read(row: ScannedRow): RowOutcome {
    const { frame, areas } = this.#rules;
    this.#isIgnored = false;
    if (frame.skips(row)) return 'skipped';
    this.refusal = frame.readJob(row) ?? this.#readEvent(row);
    if (this.refusal === null && this.#isIgnored) return 'skipped';
    this.refusal ??= this.#area.read(row) ?? this.#time.read(row) ?? frame.readRest(row);
    if (this.refusal !== null) return 'refused';
    const time = this.#time;
    this.warnings = this.#area.warnings | time.warnings | frame.optional.warnings;
    if (this.#area.area) areas.accept(this.#area.area, time.first, time.latest);
    return 'accepted';
  }

  #readEvent(row: ScannedRow): Refusal | null {
    const cell = this.#event.set(row, this.#eventPlace);
    if (cell.isEmpty) {
      return { reason: 'missing-event', detail: rowReasonSentence('missing-event') };
    }
    const kind = this.#words.meaningOf(cell);
    if (kind === null) {
      const detail = `The column plan does not say what the event ${quoteCell(cell)} means.`;
      return { reason: 'unknown-event', detail };
    }
    this.#kind = kind;
    this.#isIgnored = kind === 'ignored';
    return null;
  }

  /** Which of the three times it tells: what scraps or cancels a job ends its stay. */
  get #column(): TimeColumn {
    const kind = this.#kind;
    return kind === 'arrived' || kind === 'started' ? kind : 'finished';
  }

  next(): null {
    return null;
  }

  write(copy: BinaryCopy, line: number): void {
    const { frame } = this.#rules;
    const kind = this.#kind;
    copy.beginRow(this.stagedColumns.length);
    copy.int4(line);
    copy.bytes(frame.job.bytes, frame.job.start, frame.job.end);
    copy.int4(this.#area.area?.number ?? -1);
    copy.text(this.#column);
    for (const column of columns) copy.timestamp(column === this.#column ? this.#time.first : NaN);
    copy.timestamp(this.#time.second);
    copy.textOrNull(kind === 'scrapped' || kind === 'cancelled' ? kind : frame.ending);
    frame.optional.write(copy);
  }

  told(): Told {
    const none = { arrived: NaN, started: NaN, finished: NaN };
    return {
      job: this.#rules.frame.job.text(),
      area: this.#area.area?.name ?? null,
      ...none,
      [this.#column]: this.#time.first,
    };
  }
}
