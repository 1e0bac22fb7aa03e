import fc from 'fast-check';
import { expect, it } from 'vitest';
import { binnedPercentiles, binRatio, zeroBin } from '../../server/methods/binned-percentile.ts';

const binOf = (seconds: number) =>
  seconds === 0 ? zeroBin : Math.floor(Math.log(seconds) / Math.log(binRatio));

it('a percentile from bins is within 1 % of the element at its rank', () => {
  fc.assert(
    fc.property(
      fc.array(fc.double({ min: 0.001, max: 1e8, noNaN: true }), { minLength: 1, maxLength: 200 }),
      fc.constantFrom(0, 0.5, 1),
      (values, share) => {
        const histogram = new Map<number, number>();
        for (const value of values)
          histogram.set(binOf(value), (histogram.get(binOf(value)) ?? 0) + 1);
        // Odd counts, so that the rank falls on an element.
        if (values.length % 2 === 0) return;
        const sorted = [...values].sort((one, other) => one - other);
        const exact = sorted[share * (sorted.length - 1)] ?? 0;
        const [read = NaN] = binnedPercentiles(histogram, [share]).map(Number);
        expect(Math.abs(read - exact) / exact).toBeLessThanOrEqual(0.0101);
      },
    ),
    { seed: 20_261_205 },
  );
});

it('nothing has no percentile, and stays of no length last nothing', () => {
  expect(binnedPercentiles(new Map(), [0.5])).toEqual([null]);
  expect(binnedPercentiles(new Map([[zeroBin, 4]]), [0.5, 0.95])).toEqual([0, 0]);
});
