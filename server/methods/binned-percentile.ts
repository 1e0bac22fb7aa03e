/** Ratio of the borders of a bin: a percentile read from the bins is right within 1 %. */
export const binRatio = 1.02;
/** The bin of durations of no length. */
export const zeroBin = -10_000;

/** The duration in seconds for which a bin stands: the geometric middle of its borders. */
export const binMiddle = (bin: number): number => (bin === zeroBin ? 0 : binRatio ** (bin + 0.5));

/**
 * Percentiles from a histogram in logarithmic bins, by type 7 of Hyndman & Fan (1996) on the bins'
 * middles; within 1 % of the exact ones.
 *
 * @param histogram counts by bin
 * @param shares between 0 and 1
 * @returns seconds, or null for an empty histogram
 */
export function binnedPercentiles(
  histogram: ReadonlyMap<number, number>,
  shares: readonly number[],
): (number | null)[] {
  const bins = [...histogram].sort(([one], [other]) => one - other);
  const total = bins.reduce((sum, [, count]) => sum + count, 0);
  return shares.map((share) => (total === 0 ? null : atRank(bins, share * (total - 1))));
}

function atRank(bins: readonly (readonly [number, number])[], rank: number): number {
  const below = Math.floor(rank);
  const low = valueAt(bins, below);
  return low + (rank - below) * (valueAt(bins, below + 1) - low);
}

/** The value of the element at a place, counted from 0; the last one's beyond the end. */
function valueAt(bins: readonly (readonly [number, number])[], place: number): number {
  let reached = 0;
  for (const [bin, count] of bins) {
    reached += count;
    if (place < reached) return binMiddle(bin);
  }
  return binMiddle(bins.at(-1)?.[0] ?? zeroBin);
}
