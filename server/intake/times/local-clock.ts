import { dayMs, readLocal, type ZoneRules } from '../../../shared/local-time.ts';

/**
 * Reads local times of one zone, many in a row: as `readLocal` does, but remembers the stretch between two
 * changes of the offset, in which every local time occurs exactly once.
 */
export class LocalClock {
  readonly rules: ZoneRules;
  /** The second moment at which the clock shows what was read last, or NaN. */
  second = NaN;
  /** Whether the clock never shows what was read last. */
  skipped = false;
  /** Local times in [from, until) have this one offset: no change lies within a day of them. */
  #from = 0;
  #until = 0;
  #offset = 0;

  constructor(rules: ZoneRules) {
    this.rules = rules;
  }

  /**
   * @param clock what the wall clock shows, in milliseconds as if it were UTC
   * @returns the moment in milliseconds, the first where there are two; `second` and `skipped` tell more
   */
  read(clock: number): number {
    if (clock >= this.#from && clock < this.#until) {
      this.second = NaN;
      this.skipped = false;
      return clock - this.#offset;
    }
    const reading = readLocal(this.rules, clock);
    this.second = reading.second ?? NaN;
    this.skipped = reading.skipped;
    this.#remember(clock);
    return reading.at;
  }

  #remember(clock: number): void {
    const { changes } = this.rules;
    const next = changes.findIndex((change) => change.at + dayMs > clock);
    const current = changes[next < 0 ? changes.length - 1 : next - 1];
    if (!current) return;
    const until = (next < 0 ? Infinity : (changes[next]?.at ?? Infinity)) - dayMs;
    if (clock >= until) return;
    this.#from = current.at + dayMs;
    this.#until = until;
    this.#offset = current.offset;
  }
}
