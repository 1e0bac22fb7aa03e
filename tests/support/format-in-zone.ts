import { tz } from '@date-fns/tz';
import { format } from 'date-fns';

/** A moment as a wall clock of a zone shows it, by a date-fns pattern. */
export const formatInTimeZone = (at: number, zone: string, pattern: string): string =>
  format(at, pattern, { in: tz(zone) });
