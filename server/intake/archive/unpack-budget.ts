import { IntakeFailure } from '../failure.ts';
import { unpackedByteLimit, unpackedRatioLimit, unpackedWithoutRatio } from '../limits.ts';

/** Counts what an archive unpacks to, so that a small file cannot become an endless one. */
export class UnpackBudget {
  #unpacked = 0;

  /**
   * @param packed bytes of the archive that were read so far
   * @throws IntakeFailure where too much came out of it
   */
  spend(bytes: number, packed: number): void {
    this.#unpacked += bytes;
    if (this.#unpacked > unpackedByteLimit) {
      const gigabytes = unpackedByteLimit / 2 ** 30;
      throw tooLarge(`The archive unpacks to more than ${gigabytes} GiB.`);
    }
    if (this.#unpacked > unpackedWithoutRatio && this.#unpacked > packed * unpackedRatioLimit) {
      throw tooLarge(`The archive unpacks to more than ${unpackedRatioLimit} times its size.`);
    }
  }
}

const tooLarge = (wrong: string): IntakeFailure =>
  new IntakeFailure('unpacks-too-large', wrong, 'Export the log as CSV and upload that.');
