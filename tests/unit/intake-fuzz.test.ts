import { describe, expect, it } from 'vitest';
import { fuzzedFile } from '../support/fuzzed-files.ts';
import { judgeFile } from '../support/judged-file.ts';

/** `npm run bench -- --fuzz` judges twenty times as many. */
const seed = 20_261_201;
const lots = Array.from({ length: 10 }, (_, lot) => lot);

describe('of 500 exports to which something happened', () => {
  it.each(lots)(
    'lot %i is read to the last line, or refused with a sentence',
    async (lot) => {
      const outcomes = [];
      for (let index = lot * 50; index < lot * 50 + 50; index++) {
        const { story, shape, bytes } = await fuzzedFile(seed, index);
        const { outcome, problems } = await judgeFile(bytes, shape);
        expect({ story, problems }).toEqual({ story, problems: [] });
        outcomes.push(outcome);
      }
      // A lot of which all were refused, or none, would tell little.
      expect(new Set(outcomes)).toEqual(new Set(['read', 'refused']));
    },
    120_000,
  );
});
