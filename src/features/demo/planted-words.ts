import type { Planted } from '../../../shared/contracts/demo.ts';
import { formatCount, formatDay, formatPeriod, listed } from '../../lib/format.ts';

/** What a good reader finds of one planted thing, and how. */
export function plantedWords(planted: Planted, timeZone: string): { title: string; text: string } {
  const name = listed(planted.zones.map((zone) => zone.name));
  const since = formatDay(planted.since, timeZone);
  const limit = formatCount(planted.limit);
  switch (planted.kind) {
    case 'rising':
      return {
        title: `${name} rises`,
        text: `It has no cap. From ${since} on each job takes longer there, so fewer leave a day than come, and what waits grows week by week. Nothing else on the site rises; the site’s own level rises by what gathers here.`,
      };
    case 'held':
      return {
        title: `${name} is held at ${limit}`,
        text: `No cap is declared, but there are ${limit} chamber slots: the level touches ${limit} on most days and never goes above it. Who finds no slot waits outside, after the area before.`,
      };
    case 'overrun':
      return {
        title: `The cap of ${name} is overrun`,
        text: `It is agreed that the two hold ${limit} jobs together at most. On some days in October and November calibration takes nothing up for hours, and together they go over it; within a day they are back. Neither rises.`,
      };
    case 'lost-finishes':
      return {
        title: `${name} lost finishes`,
        text: `In the week of ${formatPeriod(planted.since ?? '', weekAfter(planted.since ?? ''), timeZone)} some jobs left without a finish being recorded. No later start can heal that, for it is the last area: they seem to be inside for ever, and only a count on the floor would show that they are not.`,
      };
  }
}

const week = 7 * 86_400_000;
const weekAfter = (at: string) => new Date(Date.parse(at) + week).toISOString();
