/** Seconds that work takes. */
export async function secondsOf(work: () => Promise<unknown>): Promise<number> {
  const began = performance.now();
  await work();
  return (performance.now() - began) / 1000;
}

export function median(values: readonly number[]): number {
  const sorted = [...values].sort((one, other) => one - other);
  return sorted[Math.floor(sorted.length / 2)] ?? NaN;
}

/** Median seconds over several runs of the same. */
export async function medianSeconds(
  times: number,
  work: (run: number) => Promise<unknown>,
): Promise<number> {
  const seconds = [];
  for (let run = 0; run < times; run++) seconds.push(await secondsOf(() => work(run)));
  return median(seconds);
}

export interface Bar {
  what: string;
  value: number;
  unit: string;
  /** The bar: at most, or at least, so much; none where the figure is only told. */
  atMost?: number;
  atLeast?: number;
}

const shown = (value: number) =>
  value >= 100 ? value.toFixed(0) : value >= 10 ? value.toFixed(1) : value.toFixed(2);

/** Prints a bar with its figure. @returns whether it was met */
export function report({ what, value, unit, atMost, atLeast }: Bar): boolean {
  const met =
    (atMost === undefined || value <= atMost) && (atLeast === undefined || value >= atLeast);
  const bar =
    atMost === undefined
      ? atLeast === undefined
        ? ''
        : `bar at least ${atLeast}`
      : `bar at most ${atMost}`;
  const verdict = bar === '' ? '' : met ? 'met' : 'MISSED';
  process.stdout.write(
    `${what.padEnd(66)} ${`${shown(value)} ${unit}`.padStart(12)}  ${bar.padEnd(18)} ${verdict}\n`,
  );
  return met;
}
