/** Gaps from a finish at one area to the arrival (else start) at the job's next one, over one pair of areas. */
export interface AreaGaps {
  beforeId: number;
  afterId: number;
  pairs: number;
  negative: number;
  /** Quantiles of the negative gaps, in seconds, all below zero. */
  q05: number;
  q25: number;
  q50: number;
  q75: number;
}

export interface ClockOffset {
  beforeId: number;
  afterId: number;
  /** So far the clock of the later area is behind that of the earlier one. */
  seconds: number;
  pairs: number;
  negative: number;
}

const leastNegative = 20;
const leastShare = 0.3;
/** Work that overlaps by nature gives negative gaps of every length; a clock gives much the same one. */
const mostSpread = 0.75;
/** Whole minutes and the trip between two terminals explain less. */
const leastSeconds = 60;

/**
 * Clocks that disagree, from jobs that seem to come to an area before they left the one before: at least 20
 * such gaps and three in ten of all, closely together (the middle half spans no more than three quarters of
 * the median), a minute at least. A true gap is never negative, so the shortest, taken as the 5th percentile
 * of the negative ones, is the offset. The greatest first.
 */
export function clockOffsets(gaps: readonly AreaGaps[]): ClockOffset[] {
  return gaps
    .filter(
      ({ pairs, negative, q05, q25, q50, q75 }) =>
        negative >= leastNegative &&
        negative >= leastShare * pairs &&
        q75 - q25 <= mostSpread * -q50 &&
        -q05 >= leastSeconds,
    )
    .map(({ beforeId, afterId, pairs, negative, q05 }) => ({
      beforeId,
      afterId,
      seconds: -q05,
      pairs,
      negative,
    }))
    .sort((one, other) => other.seconds - one.seconds);
}
