/** What left a site towards the end of its data, and in the same hours of each of the four weeks before. */
export interface PaceAtEnd {
  /** Jobs without an end, and those inside when the last length of a stay began. */
  open: number;
  insideBefore: number;
  /** Departures over the last length of a stay, and over the last quarter of it. */
  departures: number;
  latestDepartures: number;
  usualDepartures: readonly number[];
  usualLatestDepartures: readonly number[];
}

const leastInside = 10;
const leastDepartures = 10;
const samePace = 0.8;
const sameLatestPace = 0.6;

/**
 * Whether an export seems to hold only finished work. Such a log has nobody inside at its end although work
 * goes on at its usual pace: what had not finished when the export was taken is left out, so that starts
 * fall off over the last length of a stay while as many leave as ever. A plant that runs empty looks
 * otherwise: its departures dwindle too.
 */
export function holdsOnlyFinished(pace: PaceAtEnd): boolean {
  const usual = mean(pace.usualDepartures);
  const usualLatest = mean(pace.usualLatestDepartures);
  return (
    pace.open === 0 &&
    pace.insideBefore >= leastInside &&
    usualLatest >= leastDepartures &&
    pace.departures >= samePace * usual &&
    pace.latestDepartures >= sameLatestPace * usualLatest
  );
}

const mean = (values: readonly number[]) =>
  values.length === 0 ? 0 : values.reduce((total, value) => total + value, 0) / values.length;
