import type { RowAccount } from '../../shared/contracts/uploads.ts';
import {
  warningReasons,
  type RefusalReason,
  type SkipReason,
  type WarningReason,
} from '../../shared/row-reasons.ts';

const warningCodes = Object.keys(warningReasons) as WarningReason[];

/** The bit under which a warning is noted while a row is read. */
export const warningBit: Readonly<Record<WarningReason, number>> = Object.fromEntries(
  warningCodes.map((code, index) => [code, 1 << index]),
) as Record<WarningReason, number>;

/** The warnings whose bits are set. */
export function warningsOf(bits: number): WarningReason[] {
  return warningCodes.filter((code) => (bits & warningBit[code]) !== 0);
}

/** Counts the rows of a file by what became of them. */
export class RowTally {
  accepted = 0;
  readonly #skipped = new Map<SkipReason, number>();
  readonly #refused = new Map<RefusalReason, number>();
  /** How many rows bear each combination of warnings: there are few, and most rows bear the same. */
  readonly #warned: number[] = [];

  accept(warnings: number): void {
    this.accepted += 1;
    this.#warned[warnings] = (this.#warned[warnings] ?? 0) + 1;
  }

  skip(reason: SkipReason): void {
    this.#skipped.set(reason, (this.#skipped.get(reason) ?? 0) + 1);
  }

  refuse(reason: RefusalReason): void {
    this.#refused.set(reason, (this.#refused.get(reason) ?? 0) + 1);
  }

  get rowsRead(): number {
    return this.accepted + sum(this.#skipped.values()) + sum(this.#refused.values());
  }

  /** The account as far as reading tells it: what accepted rows mean to the site is not known yet. */
  account(): RowAccount {
    return {
      rowsRead: this.rowsRead,
      skipped: sum(this.#skipped.values()),
      new: 0,
      same: 0,
      completing: 0,
      correcting: 0,
      refused: sum(this.#refused.values()),
      skippedBy: Object.fromEntries(this.#skipped),
      refusedBy: Object.fromEntries(this.#refused),
      warnings: this.#warnings(),
      voided: 0,
    };
  }

  #warnings(): Record<string, number> {
    const counts: Record<string, number> = {};
    this.#warned.forEach((rows, bits) => {
      for (const code of warningsOf(bits)) counts[code] = (counts[code] ?? 0) + rows;
    });
    return counts;
  }
}

const sum = (counts: Iterable<number>): number =>
  [...counts].reduce((total, count) => total + count, 0);
