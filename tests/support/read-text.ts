import type { ColumnPlan } from '../../shared/contracts/plan.ts';
import { detect } from '../../server/intake/detect.ts';
import { readingOf, stayRowOf } from '../../server/intake/reading.ts';
import { RowTally, warningsOf } from '../../server/intake/row-account.ts';
import { RowScanner } from '../../server/intake/row-scanner.ts';
import { rawOf } from '../../server/intake/sample.ts';

/** One row of a text as intake judged it. Times are ISO 8601 in UTC, to the millisecond. */
export interface JudgedRow {
  line: number;
  outcome: 'accepted' | 'skipped' | 'refused';
  reason: string | null;
  detail: string | null;
  warnings: string[];
  raw: string;
  job: string | null;
  area: string | null;
  arrived: string | null;
  started: string | null;
  finished: string | null;
}

export interface ReadTextOptions {
  plan?: Partial<ColumnPlan>;
  timeZone?: string;
  receivedAt?: string;
  knownAreas?: string[];
}

/** Reads a text as intake does, row by row, without a database. */
export function readText(text: string | Buffer, options: ReadTextOptions = {}) {
  const bytes = Buffer.isBuffer(text) ? text : Buffer.from(text);
  const timeZone = options.timeZone ?? 'UTC';
  const settings = {
    shape: 'stay' as const,
    timeZone,
    timeFormat: 'auto',
    unknownAreas: 'add' as const,
    mode: 'merge' as const,
  };
  const { columns } = options.plan ?? {};
  const plan = columns ? { ...settings, columns, ...options.plan } : null;
  const reading = readingOf(detect({ text: bytes, isWhole: true, plan, timeZone }));
  const { stayRow, areas } = stayRowOf(reading, {
    receivedAt: new Date(options.receivedAt ?? '2026-06-01T00:00:00Z'),
    knownAreas: new Map((options.knownAreas ?? []).map((folded, index) => [folded, index + 1])),
  });
  const tally = new RowTally();
  const rows: JudgedRow[] = [];
  let hasHeader = false;
  const iso = (micros: number): string | null =>
    Number.isNaN(micros) ? null : new Date(Math.floor(micros / 1000)).toISOString();
  new RowScanner(reading.delimiter).scan(bytes, true, (row) => {
    if (!hasHeader && row.trouble === null && rawOf(row).trim() !== '') {
      hasHeader = true;
      return;
    }
    const outcome = stayRow.read(row);
    if (outcome === 'accepted') tally.accept(stayRow.warnings);
    else if (outcome === 'skipped') tally.skip(stayRow.skipReason);
    else if (stayRow.refusal) tally.refuse(stayRow.refusal.reason);
    const isAccepted = outcome === 'accepted';
    rows.push({
      line: row.line,
      outcome,
      reason:
        outcome === 'refused'
          ? (stayRow.refusal?.reason ?? null)
          : outcome === 'skipped'
            ? stayRow.skipReason
            : null,
      detail: outcome === 'refused' ? (stayRow.refusal?.detail ?? null) : null,
      warnings: isAccepted ? warningsOf(stayRow.warnings) : [],
      raw: rawOf(row),
      job: isAccepted ? stayRow.job.text() : null,
      area: isAccepted ? (stayRow.area?.name ?? null) : null,
      arrived: isAccepted ? iso(stayRow.times.of(0)) : null,
      started: isAccepted ? iso(stayRow.times.of(1)) : null,
      finished: isAccepted ? iso(stayRow.times.of(2)) : null,
    });
  });
  return { rows, account: tally.account(), areas: areas.accepted, plan: reading.plan };
}
