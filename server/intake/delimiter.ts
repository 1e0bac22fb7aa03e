import { delimiters, type ColumnPlan } from '../../shared/contracts/plan.ts';
import { readSample, type Sample } from './sample.ts';
import { placeColumns } from './shapes/stay-columns.ts';

/** Rows by which delimiters are compared. */
const rowsCompared = 200;

/**
 * Reads the beginning of a file under the delimiter that suits it best: the one under which a plan's
 * columns are found, else the one that cuts most rows into as many cells as the header, and into more.
 */
export function readSampleByDelimiter(
  text: Buffer,
  isWhole: boolean,
  columns: ColumnPlan['columns'] | null,
): Sample {
  const samples = delimiters.map((delimiter) => readSample(text, isWhole, delimiter));
  const suited = samples.filter((sample) => columns && findsColumns(columns, sample.header));
  const [best] = (suited.length > 0 ? suited : samples)
    .map((sample) => ({ sample, score: regularity(sample) }))
    .sort((a, b) => b.score - a.score);
  return best?.sample ?? readSample(text, isWhole, ',');
}

function findsColumns(columns: ColumnPlan['columns'], header: readonly string[]): boolean {
  try {
    placeColumns(columns, header);
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
