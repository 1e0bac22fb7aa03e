import { span } from './plan.ts';
import { simulatePlant, type Visit } from './simulate.ts';

/** One export of the plant, as its job-tracking system would write it. */
export interface PlantExport {
  fileName: string;
  text: string;
}

const header = 'Order,Work centre,Arrived,Start,End,Family,Due';

/** When each export was taken: at the end of each month, the last on the last evening. */
const takenAt = [
  { month: '2026-06', at: '2026-06-30T23:00Z' },
  { month: '2026-07', at: '2026-07-31T23:00Z' },
  { month: '2026-08', at: '2026-08-31T23:00Z' },
  { month: '2026-09', at: '2026-09-30T23:00Z' },
  { month: '2026-10', at: '2026-11-01T00:00Z' },
  { month: '2026-11', at: new Date(span.until).toISOString() },
].map(({ month, at }) => ({ month, at: Date.parse(at) }));

/**
 * The plant's months as exports with a row for each stay, as it stood when the export was taken: what was
 * open then has no end yet, and is told again, completed, in the next.
 */
export function plantExports(): PlantExport[] {
  const visits = simulatePlant();
  return takenAt.map(({ month, at }, index) => {
    const before = takenAt[index - 1]?.at ?? span.from;
    const rows = visits.filter((visit) => visit.arrived <= at && endOf(visit) > before);
    return {
      fileName: `lowmoor-${month}.csv`,
      text: [header, ...rows.map((visit) => rowOf(visit, at)), ''].join('\n'),
    };
  });
}

/** When a visit was last told of: a lost end is told of once, with its start. */
const endOf = ({ started, finished }: Visit): number => finished ?? started;

function rowOf(visit: Visit, takenAt: number): string {
  const told = (at: number | null) => (at === null || at > takenAt ? '' : toMinute(at));
  return [
    visit.job,
    visit.area,
    told(visit.arrived),
    told(visit.started),
    told(visit.finished),
    visit.family,
    new Date(visit.due).toISOString().slice(0, 10),
  ].join(',');
}

const toMinute = (at: number) => `${new Date(at).toISOString().slice(0, 16)}Z`;
