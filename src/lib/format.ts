/** Figures, moments and lengths of time in words. A figure that is not known is an em dash. */

export const unknown = '—';

const locale = () => (typeof navigator === 'undefined' ? 'en-GB' : navigator.language);

/** A count: whole numbers whole, others with one place. */
export function formatCount(value: number | null): string {
  if (value === null) return unknown;
  return new Intl.NumberFormat(locale(), { maximumFractionDigits: 1 }).format(value);
}

/** A number with a fixed number of places. */
export function formatNumber(value: number | null, places: number): string {
  if (value === null) return unknown;
  // Zero has no sign.
  const rounded = Number(value.toFixed(places)) === 0 ? 0 : value;
  return new Intl.NumberFormat(locale(), {
    minimumFractionDigits: places,
    maximumFractionDigits: places,
  }).format(rounded);
}

const minute = 60;
const hour = 60 * minute;
const day = 24 * hour;

/** A length of time: 0 s, 42 s, 42 min, 5.9 h, 1.1 d. */
export function formatDuration(seconds: number | null): string {
  if (seconds === null) return unknown;
  const size = Math.abs(seconds);
  if (size < minute) return `${formatNumber(seconds, Number.isInteger(seconds) ? 0 : 1)} s`;
  if (size < 2 * hour) return `${formatNumber(seconds / minute, 0)} min`;
  if (size < 2 * day) return `${formatNumber(seconds / hour, 1)} h`;
  return `${formatNumber(seconds / day, 1)} d`;
}

/** A rate per hour, told per day: 52.0 / day. */
export const formatPerDay = (perHour: number | null): string =>
  perHour === null ? unknown : formatNumber(perHour * 24, 1);

/** A share: 93 %. */
export const formatShare = (share: number | null): string =>
  share === null ? unknown : `${formatNumber(share * 100, 0)} %`;

export const monthNames = [
  'Jan',
  'Feb',
  'Mar',
  'Apr',
  'May',
  'Jun',
  'Jul',
  'Aug',
  'Sep',
  'Oct',
  'Nov',
  'Dec',
];

interface LocalParts {
  year: number;
  month: number;
  day: number;
  time: string;
}

function partsIn(at: string | number | Date, timeZone: string): LocalParts {
  const parts = new Intl.DateTimeFormat('en-GB', {
    timeZone,
    year: 'numeric',
    month: 'numeric',
    day: 'numeric',
    hour: '2-digit',
    minute: '2-digit',
    hourCycle: 'h23',
  }).formatToParts(new Date(at));
  const part = (type: string) => parts.find((each) => each.type === type)?.value ?? '';
  return {
    year: Number(part('year')),
    month: Number(part('month')),
    day: Number(part('day')),
    time: `${part('hour')}:${part('minute')}`,
  };
}

/** A day in the site's zone: 3 Aug 2026. */
export function formatDay(at: string | number | Date | null, timeZone: string): string {
  if (at === null) return unknown;
  const { year, month, day: date } = partsIn(at, timeZone);
  return `${date} ${monthNames[month - 1] ?? ''} ${year}`;
}

/** A calendar day `2026-08-03`: 3 Aug 2026. */
export const formatCalendarDay = (day: string): string => formatDay(`${day}T00:00:00Z`, 'UTC');

/** A moment in the site's zone: 3 Aug 2026, 14:05. */
export function formatMoment(at: string | number | Date | null, timeZone: string): string {
  if (at === null) return unknown;
  return `${formatDay(at, timeZone)}, ${partsIn(at, timeZone).time}`;
}

/** A period of days in the site's zone, by its first and last day: 2 to 29 Nov 2026. */
export function formatPeriod(from: string, to: string, timeZone: string): string {
  const first = partsIn(from, timeZone);
  const last = partsIn(Date.parse(to) - 1, timeZone);
  const end = formatDay(Date.parse(to) - 1, timeZone);
  if (first.year !== last.year) return `${formatDay(from, timeZone)} to ${end}`;
  if (first.month !== last.month)
    return `${first.day} ${monthNames[first.month - 1] ?? ''} to ${end}`;
  return first.day === last.day ? end : `${first.day} to ${end}`;
}

const units = ['B', 'kB', 'MB', 'GB', 'TB'];

/** A size: 82 MB. */
export function formatBytes(bytes: number): string {
  let size = bytes;
  let unit = 0;
  while (size >= 1000 && unit < units.length - 1) {
    size /= 1000;
    unit += 1;
  }
  return `${formatNumber(size, size < 10 && unit > 0 ? 1 : 0)} ${units[unit] ?? ''}`;
}

/** 1 job, 2 jobs. */
export const plural = (count: number, one: string, many = `${one}s`): string =>
  `${formatCount(count)} ${count === 1 ? one : many}`;

/** 1 job, 2 units: a count in the unit of the figures. */
export const inUnit = (count: number | null, unit: 'jobs' | 'units'): string =>
  count === null ? unknown : plural(count, unit === 'jobs' ? 'job' : 'unit');

/** Words in a row: a, b and c. */
export function listed(words: readonly string[]): string {
  if (words.length <= 1) return words[0] ?? '';
  return `${words.slice(0, -1).join(', ')} and ${words.at(-1) ?? ''}`;
}
