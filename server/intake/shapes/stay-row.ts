import type { SkipReason } from '../../../shared/row-reasons.ts';
import type { BinaryCopy } from '../binary-copy.ts';
import type { Refusal } from '../refusal.ts';
import type { ScannedRow } from '../text/row-scanner.ts';
import { AreaCell } from './area-cell.ts';
import type { StayPlaces } from './places.ts';
import type { RowOutcome, RowRules, ShapeReader, Told } from './shape-reader.ts';
import { StayTimes } from './stay-times.ts';

/** Reads rows that tell one stay each. */
export class StayRow implements ShapeReader {
  readonly part = 0;
  readonly stagedColumns: readonly string[];
  warnings = 0;
  refusal: Refusal | null = null;
  readonly #rules: RowRules;
  readonly #area: AreaCell;
  readonly #times: StayTimes;

  constructor(places: StayPlaces, rules: RowRules) {
    this.#rules = rules;
    this.#area = new AreaCell(places.area, rules.areas, rules.refuseUnknownAreas);
    this.#times = new StayTimes(places.times, rules.times, rules.bounds);
    const { frame } = rules;
    this.stagedColumns = [
      ...['line', 'job_key', 'area_number', 'arrived', 'started', 'finished'],
      ...(frame.tellsEndings ? ['ending'] : []),
      ...frame.optional.stagedColumns,
    ];
  }

  get skipReason(): SkipReason {
    return this.#rules.frame.skipReason;
  }

  read(row: ScannedRow): RowOutcome {
    const { frame, areas } = this.#rules;
    if (frame.skips(row)) return 'skipped';
    this.refusal =
      frame.readJob(row) ?? this.#area.read(row) ?? this.#times.read(row) ?? frame.readRest(row);
    if (this.refusal !== null) return 'refused';
    const times = this.#times;
    this.warnings = this.#area.warnings | times.warnings | times.missing | frame.optional.warnings;
    if (this.#area.area) areas.accept(this.#area.area, times.first, times.latest);
    return 'accepted';
  }

  next(): null {
    return null;
  }

  write(copy: BinaryCopy, line: number): void {
    const { frame } = this.#rules;
    copy.beginRow(this.stagedColumns.length);
    copy.int4(line);
    copy.bytes(frame.job.bytes, frame.job.start, frame.job.end);
    copy.int4(this.#area.area?.number ?? -1);
    for (let index = 0; index < 3; index++) copy.timestamp(this.#times.of(index));
    if (frame.tellsEndings) copy.textOrNull(frame.ending);
    frame.optional.write(copy);
  }

  told(): Told {
    return {
      job: this.#rules.frame.job.text(),
      area: this.#area.area?.name ?? null,
      ...this.#times.told(),
    };
  }
}
