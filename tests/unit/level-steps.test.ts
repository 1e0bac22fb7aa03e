import { describe, expect, it } from 'vitest';
import { levelSteps, type LevelBlock } from '../../server/methods/level-steps.ts';

const second = 1000;
const change = (at: number, ups: number, downs: number): LevelBlock => ({
  starts: at * second,
  ends: at * second,
  ups,
  downs,
  gathered: 0,
  highest: ups - downs,
});

describe('a level folded over steps', () => {
  it('keeps its level where nothing happens', () => {
    expect(levelSteps([0, 10 * second], 3, [])).toEqual([
      { levelStart: 3, levelEnd: 3, integral: 30, peak: 3, ups: 0, downs: 0 },
    ]);
  });

  it('counts a change at the start of a step in that step, and its peak takes the place of the level before', () => {
    const [first, next] = levelSteps([0, 10 * second, 20 * second], 5, [change(10, 0, 2)]);
    expect(first).toMatchObject({ levelStart: 5, levelEnd: 5, peak: 5, integral: 50, downs: 0 });
    expect(next).toMatchObject({ levelStart: 5, levelEnd: 3, peak: 3, integral: 30, downs: 2 });
  });

  it('nets what comes and goes at one instant', () => {
    const [step] = levelSteps([0, 10 * second], 0, [change(4, 2, 2)]);
    expect(step).toMatchObject({ peak: 0, integral: 0, ups: 2, downs: 2 });
  });

  it('takes whole hours as blocks with what they gathered', () => {
    // Up by 2 at half past, down by 1 a quarter later, within one hour.
    const hour: LevelBlock = {
      starts: 0,
      ends: 3600 * second,
      ups: 2,
      downs: 1,
      gathered: 2 * 1800 - 900,
      highest: 2,
    };
    const [step] = levelSteps([0, 7200 * second], 1, [hour]);
    expect(step).toEqual({
      levelStart: 1,
      levelEnd: 2,
      integral: 3600 + 2700 + 2 * 3600,
      peak: 3,
      ups: 2,
      downs: 1,
    });
  });
});
