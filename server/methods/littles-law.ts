/** What one window gives, by two routes: levels on the one side, stays on the other. */
export interface LittlesLawInput {
  /** Length of the window T, in seconds. */
  seconds: number;
  /** ∫ N(t) dt from the levels, in job-seconds. */
  levelIntegral: number;
  arrivals: number;
  departures: number;
  /** Σ (d − a) over stays that left in the window, in seconds. */
  flowSum: number;
  /** Σ (s − a) over stays that left in the window and entered before it, in seconds. */
  beforeSum: number;
  /** Σ (e − max(a, s)) over stays entered before e and not left before e, in seconds. */
  stillInsideSum: number;
}

export interface LittlesLaw {
  wipMean: number;
  arrivalRatePerHour: number;
  departureRatePerHour: number;
  flowMeanSeconds: number | null;
  /** δ·W, in jobs. */
  product: number;
  residual: number;
  edgeStart: number;
  edgeEnd: number;
  /** Zero up to rounding; anything else says that derived data are wrong. */
  unexplained: number;
}

/**
 * Little's Law on a finite window with its exact edges: L = δ·W − edgeStart + edgeEnd.
 *
 * Little (1961), Operations Research 9(3); Little & Graves (2008), in Building Intuition; Kim & Whitt
 * (2013), Operations Research 61(4), also for windows in which rates vary. From memory.
 */
export function littlesLaw(input: LittlesLawInput): LittlesLaw {
  const { seconds, arrivals, departures, flowSum } = input;
  const wipMean = input.levelIntegral / seconds;
  const product = flowSum / seconds;
  const residual = wipMean - product;
  const edgeStart = input.beforeSum / seconds;
  const edgeEnd = input.stillInsideSum / seconds;
  return {
    wipMean,
    arrivalRatePerHour: (arrivals / seconds) * 3600,
    departureRatePerHour: (departures / seconds) * 3600,
    flowMeanSeconds: departures > 0 ? flowSum / departures : null,
    product,
    residual,
    edgeStart,
    edgeEnd,
    unexplained: residual - (edgeEnd - edgeStart),
  };
}
