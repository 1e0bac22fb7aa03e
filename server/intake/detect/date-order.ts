import type { DateOrder } from '../../../shared/contracts/plan.ts';

const dayAndMonth = /^\s*(\d{1,2})([./-])(\d{1,2})\2(?:\d{4}|\d{2})(?!\d)/;

/** Counts what dates of two short numbers and a year say of the order of day and month. */
export class DateOrderEvidence {
  dayFirst = 0;
  monthFirst = 0;
  /** Dates that can be read both ways, by their separator: dots stand in day-first dates (common practice). */
  #openDotted = 0;
  #open = 0;

  add(cell: string): void {
    const found = dayAndMonth.exec(cell);
    if (!found) return;
    const first = Number(found[1]);
    const second = Number(found[3]);
    if (first > 12 && second <= 12) this.dayFirst += 1;
    else if (second > 12 && first <= 12) this.monthFirst += 1;
    else if (found[2] === '.') this.#openDotted += 1;
    else this.#open += 1;
  }

  /** Whether any date speaks clearly for one of the orders. */
  get isDecided(): boolean {
    return this.dayFirst !== this.monthFirst;
  }

  /** The order, `unknown` where dates can be read both ways, null where there are no such dates. */
  get order(): DateOrder | 'unknown' | null {
    if (this.isDecided) return this.dayFirst > this.monthFirst ? 'day-first' : 'month-first';
    if (this.dayFirst > 0 || this.#open > 0) return 'unknown';
    return this.#openDotted > 0 ? 'day-first' : null;
  }
}
