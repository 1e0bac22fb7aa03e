import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import type { Cut, OpenedFile } from '../opened-file.ts';
import type { SampleRow } from '../sample.ts';
import { placeColumns } from '../shapes/places.ts';
import { isWrittenTime } from './time-like.ts';

/** The beginning of a file, cut in one way, with its header. */
export interface Sample {
  cut: Cut;
  /** Its cells without blanks at their ends. */
  header: string[];
  /** The line on which it stands; 0 where the file has none and its columns are numbered. */
  headerLine: number;
  /** Rows behind the header that hold anything else. */
  rows: SampleRow[];
}

/** Rows by which ways of cutting are compared. */
const rowsCompared = 200;
/** Rows among which a header is looked for. */
const headerWithin = 50;

/**
 * The way of cutting that suits the beginning of a file best: one under which a plan's columns are found,
 * else the one that cuts most rows into as many cells as the header, and into more.
 */
export function chooseCut(file: OpenedFile, plan: ColumnPlan | null): Sample {
  const samples = file.cuts.map((cut) => withHeader(cut, file.headerLine, plan));
  const suited = samples.filter(({ header }) => plan && findsColumns(plan, header));
  const [best] = (suited.length > 0 ? suited : samples)
    .map((sample) => ({ sample, score: regularity(sample) }))
    .sort((a, b) => b.score - a.score);
  if (!best) throw new Error('A file can be cut in no way.');
  return best.sample;
}

function withHeader(cut: Cut, told: number | null, plan: ColumnPlan | null): Sample {
  const line = told ?? plan?.headerLine ?? findHeader(cut.rows, plan);
  const width = Math.max(0, ...cut.rows.slice(0, rowsCompared).map(({ cells }) => cells.length));
  const found = cut.rows.find((row) => row.line === line);
  const header =
    line === 0 && told === null
      ? Array.from({ length: width }, (_, index) => `column ${index + 1}`)
      : (found?.cells.map((cell) => cell.trim()) ?? []);
  const rows = cut.rows.filter((row) => row.line > line && !repeats(row, header));
  return { cut, header, headerLine: line, rows };
}

const repeats = ({ cells }: SampleRow, header: readonly string[]): boolean =>
  cells.length === header.length && cells.every((cell, index) => cell.trim() === header[index]);

/**
 * The line of the header: the first row in which a plan's columns are found, else the first that is as wide
 * as the rows are. What stands above it is a title. Where that row holds times it is no header.
 */
function findHeader(rows: readonly SampleRow[], plan: ColumnPlan | null): number {
  const first = rows.slice(0, headerWithin);
  const named = plan && first.find(({ cells }) => findsColumns(plan, cells));
  if (named) return named.line;
  const usual = usualWidth(rows.slice(0, rowsCompared));
  const wide = first.find((row) => filled(row) > usual / 2) ?? first[0];
  if (!wide) return 1;
  return plan === null &&
    wide.cells.length > 1 &&
    wide.cells.some((cell) => isWrittenTime(cell.trim()))
    ? 0
    : wide.line;
}

const filled = ({ cells }: SampleRow): number => cells.filter((cell) => cell.trim() !== '').length;

/** The width that most rows have. */
function usualWidth(rows: readonly SampleRow[]): number {
  const counts = new Map<number, number>();
  for (const { cells } of rows) counts.set(cells.length, (counts.get(cells.length) ?? 0) + 1);
  const [usual] = [...counts].sort((a, b) => b[1] - a[1] || b[0] - a[0]);
  return usual?.[0] ?? 0;
}

function findsColumns(plan: ColumnPlan, header: readonly string[]): boolean {
  try {
    placeColumns(plan, header);
    return true;
  } catch {
    return false;
  }
}

/** 0 where the header is not cut at all; grows with the share of rows cut alike and with their cells. */
function regularity({ header, rows }: Sample): number {
  if (header.length < 2) return 0;
  const compared = rows.slice(0, rowsCompared);
  const alike = compared.filter(({ cells }) => cells.length === header.length).length;
  const share = compared.length === 0 ? 1 : alike / compared.length;
  return share * Math.log(header.length) + header.length / 1000;
}
