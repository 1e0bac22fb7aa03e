/** An instant as a bound value for SQL; the ends of time where it is not finite. */
export const instantValue = (at: number): string =>
  at === -Infinity ? '-infinity' : at === Infinity ? 'infinity' : new Date(at).toISOString();
