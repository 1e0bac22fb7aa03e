/**
 * A level that changes by jumps, folded exactly over steps of time. Times are milliseconds, integrals
 * level-seconds. Nothing is sampled.
 */

/** Changes of a level within [starts, ends), relative to the level just before it. */
export interface LevelBlock {
  starts: number;
  /** Equal to `starts` for the changes of a single instant. */
  ends: number;
  ups: number;
  downs: number;
  /** ∫ (level − level before) dt over the block, in level-seconds. */
  gathered: number;
  /** Highest level within the block less the level before it. */
  highest: number;
}

export interface LevelFigures {
  /** Level just before the step. */
  levelStart: number;
  levelEnd: number;
  /** ∫ level dt over the step, in level-seconds. */
  integral: number;
  /** Highest level on the step, its first instant included and its last left out. */
  peak: number;
  ups: number;
  downs: number;
}

/**
 * Folds blocks into the steps between borders.
 *
 * @param borders n + 1 moments in order for n steps
 * @param level level just before the first border
 * @param blocks in order of time, none across a border
 */
export function levelSteps(
  borders: readonly number[],
  level: number,
  blocks: readonly LevelBlock[],
): LevelFigures[] {
  const steps: LevelFigures[] = [];
  let next = 0;
  let now = level;
  for (let index = 0; index + 1 < borders.length; index++) {
    const [from, to] = [borders[index] ?? 0, borders[index + 1] ?? 0];
    const first = next;
    while (next < blocks.length && (blocks[next]?.starts ?? to) < to) next++;
    const step = foldStep(from, to, now, blocks.slice(first, next));
    steps.push(step);
    now = step.levelEnd;
  }
  return steps;
}

function foldStep(
  from: number,
  to: number,
  levelStart: number,
  blocks: readonly LevelBlock[],
): LevelFigures {
  const step = { levelStart, levelEnd: levelStart, integral: 0, peak: -Infinity, ups: 0, downs: 0 };
  let since = from;
  const holdUntil = (until: number) => {
    if (until <= since) return;
    step.integral += (step.levelEnd * (until - since)) / 1000;
    step.peak = Math.max(step.peak, step.levelEnd);
    since = until;
  };
  for (const block of blocks) {
    holdUntil(block.starts);
    step.integral += (step.levelEnd * (block.ends - block.starts)) / 1000 + block.gathered;
    step.peak = Math.max(step.peak, step.levelEnd + block.highest);
    step.ups += block.ups;
    step.downs += block.downs;
    step.levelEnd += block.ups - block.downs;
    since = Math.max(since, block.ends);
  }
  holdUntil(to);
  return step;
}
