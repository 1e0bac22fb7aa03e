import type { TrustNotice } from '../../shared/contracts/trust.ts';
import type { ClockOffset } from './clock-offset.ts';

/** Words and advice for an export that holds only finished work; nothing where it does not seem to. */
export function filteredNotices(isFiltered: boolean): TrustNotice[] {
  if (!isFiltered) return [];
  return [
    {
      kind: 'finish-filtered',
      zoneIds: [],
      text: 'No job is open at the end of the data, though as many left as ever: the export seems to hold finished work only. WIP falls to nothing towards the end, which is not true of the plant.',
      advice:
        'Export the jobs that are still open as well (filter by start, or not at all), and load that file too.',
      seconds: null,
    },
  ];
}

/** One notice for each area whose feed lies behind the others. */
export function behindNotices(
  areas: readonly {
    area: { id: number; name: string };
    seconds: number;
    expected: number;
  }[],
): TrustNotice[] {
  return areas.map(({ area, seconds, expected }) => ({
    kind: 'area-behind',
    zoneIds: [area.id],
    text: `The data of ${area.name} end ${length(seconds)} before those of the other areas; about ${Math.round(expected)} starts and finishes were to be expected since.`,
    advice: `Look whether the feed of ${area.name} has stopped, and load what is missing. Until then its WIP stands still at the end.`,
    seconds,
  }));
}

/** One notice for each pair of areas whose clocks disagree. */
export function clockNotices(
  offsets: readonly ClockOffset[],
  names: ReadonlyMap<number, string>,
): TrustNotice[] {
  return offsets.map(({ beforeId, afterId, seconds, pairs, negative }) => {
    const [before, after] = [names.get(beforeId) ?? '', names.get(afterId) ?? ''];
    return {
      kind: 'clock-offset',
      zoneIds: [beforeId, afterId],
      text: `The clock of ${after} is about ${length(seconds)} behind that of ${before}: ${negative} of ${pairs} jobs seem to come to ${after} before they left ${before}.`,
      advice: `Have both clocks set alike. Until then waiting times at ${after} are about ${length(seconds)} too short.`,
      seconds,
    };
  });
}

/** A length of time in words: 12 min, 26 h, 3.4 days. */
function length(seconds: number): string {
  if (seconds < 2 * 3600) return `${Math.max(1, Math.round(seconds / 60))} min`;
  if (seconds < 48 * 3600) return `${Math.round(seconds / 3600)} h`;
  return `${Math.round((seconds / 86_400) * 10) / 10} days`;
}
