/** What time it is, injected wherever it matters, so that tests can say. */
export interface Clock {
  now(): Date;
}

export const systemClock: Clock = { now: () => new Date() };
