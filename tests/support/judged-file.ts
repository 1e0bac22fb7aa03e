import { refusalReasons, skipReasons, warningReasons } from '../../shared/row-reasons.ts';
import { IntakeFailure } from '../../server/intake/failure.ts';
import { previewOf } from '../../server/intake/preview.ts';
import type { ExportShape } from './export-writer.ts';
import { readText } from './read-text.ts';

/** What became of a file, and what was wrong with that. */
export interface Judgement {
  outcome: 'read' | 'refused';
  rows: number;
  refused: number;
  problems: string[];
}

const plans: Readonly<Record<ExportShape, object>> = {
  stay: {
    shape: 'stay',
    columns: {
      ...{ job: 'Job', area: 'Area', arrived: 'Arrival', started: 'Start', finished: 'Finish' },
      quantity: 'Quantity',
    },
  },
  event: {
    shape: 'event',
    columns: { job: 'Job', area: 'Area', event: 'Event', time: 'Time', quantity: 'Quantity' },
    eventWords: { arrived: ['Arrived'], started: ['Started'], finished: ['Finished'] },
  },
  job: {
    shape: 'job',
    columns: { job: 'Job' },
    areas: [{ area: 'Strip-down', started: 'Strip-down start', finished: 'Strip-down finish' }],
  },
};

const sentence = /^["“A-Z\d].*[.]$/s;

/**
 * Reads a file as intake does and looks for what must never happen: an error that is no sentence, counts that
 * do not add up, a line of a text that is in no row.
 *
 * @param shape the shape by whose plan it is read; null where it is detected
 */
export async function judgeFile(bytes: Buffer, shape: ExportShape | null): Promise<Judgement> {
  const problems = await previewProblems(bytes);
  try {
    const read = await readText(bytes, {
      ...(shape ? { plan: plans[shape] as { columns: object } } : {}),
      decidesDateOrder: true,
    });
    problems.push(...accountProblems(read), ...lineProblems(bytes, read));
    const { rowsRead, refused } = read.account;
    return { outcome: 'read', rows: rowsRead, refused, problems };
  } catch (error) {
    return { outcome: 'refused', rows: 0, refused: 0, problems: [...problems, ...failed(error)] };
  }
}

type Read = Awaited<ReturnType<typeof readText>>;

function accountProblems({ rows, account, taken }: Read): string[] {
  const count = (outcome: string) => rows.filter((row) => row.outcome === outcome).length;
  const sum = (by: Record<string, number>) =>
    Object.values(by).reduce((all, each) => all + each, 0);
  const above = account.skipped - count('skipped');
  const unknown = [
    ...Object.keys(account.skippedBy).filter((code) => !(code in skipReasons)),
    ...Object.keys(account.refusedBy).filter((code) => !(code in refusalReasons)),
    ...Object.keys(account.warnings).filter((code) => !(code in warningReasons)),
  ];
  const untold = rows.filter((row) =>
    row.outcome === 'accepted'
      ? !row.job || !row.area || !(row.arrived ?? row.started ?? row.finished)
      : row.outcome === 'refused' && !sentence.test(row.detail ?? ''),
  );
  const wrong: [boolean, string][] = [
    [account.rowsRead === rows.length + above && above >= 0, 'rows do not add up'],
    [account.refused === count('refused'), 'refused rows do not add up'],
    [sum(account.skippedBy) === account.skipped, 'reasons to skip do not add up'],
    [sum(account.refusedBy) === account.refused, 'reasons to refuse do not add up'],
    [unknown.length === 0, `unknown reasons ${unknown.join(', ')}`],
    [untold.length === 0, `rows that tell nothing: ${JSON.stringify(untold[0])}`],
    [taken.silent.length === 0, `silent rows on lines ${taken.silent.join(', ')}`],
  ];
  return wrong.filter(([isRight]) => !isRight).map(([, what]) => what);
}

function lineProblems(bytes: Buffer, { kind, encoding, taken }: Read): string[] {
  // Rows of other kinds of file are no lines.
  if (kind !== 'text') return [];
  const lines = linesOf(bytes, encoding);
  return lines === taken.lines ? [] : [`${lines} lines, ${taken.lines} of them in rows`];
}

/** Lines of a text, told by nothing but its encoding. */
function linesOf(bytes: Buffer, encoding: string | undefined): number {
  const isWide = encoding?.startsWith('utf-16') ?? false;
  // Of the other encodings a byte is enough: what stands between line ends does not matter here.
  const text = isWide ? new TextDecoder(encoding).decode(bytes) : bytes.toString('latin1');
  const isBlank = text === '' || (!isWide && text === '\xEF\xBB\xBF');
  const hasLoneReturns = !bytes.includes('\n') && bytes.includes('\r');
  const lines = (hasLoneReturns ? text.replaceAll('\r', '\n') : text)
    .replace(/\n$/, '')
    .split('\n');
  return isBlank ? 0 : lines.length;
}

async function previewProblems(bytes: Buffer): Promise<string[]> {
  const open = async function* () {
    await Promise.resolve();
    yield Buffer.from(bytes);
  };
  const asked = {
    ...{ open, isCut: bytes.length % 2 === 1, plan: null, savedPlans: [], timeZone: 'UTC' },
    receivedAt: new Date('2026-06-01T00:00:00Z'),
    knownAreas: new Map<string, number>(),
  };
  return previewOf(asked).then(() => [], failed);
}

function failed(error: unknown): string[] {
  if (!(error instanceof IntakeFailure))
    return [error instanceof Error ? (error.stack ?? error.message) : String(error)];
  return sentence.test(error.message) ? [] : [`no sentence: ${error.message}`];
}
