/** Key of one level of one zone in a map. */
export const trackKey = (zoneId: number, measure: string): string => `${zoneId} ${measure}`;
