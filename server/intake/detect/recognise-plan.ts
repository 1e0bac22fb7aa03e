import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import { fingerprintOf } from '../column-plans.ts';
import { openFile } from '../open-file.ts';
import type { OpenedFile, Opener } from '../opened-file.ts';

/** A saved plan as far as it is recognised and read by. */
export interface KnownPlan {
  id: number;
  name: string;
  plan: ColumnPlan;
  headerFingerprint: string;
}

/** Rows among which a header is looked for. */
const headerWithin = 50;

/**
 * Opens a file by a plan, or where none is given by the saved plan that was made for its kind.
 *
 * @param isCut whether only the beginning of the file is there
 * @throws IntakeFailure where the file cannot be read
 */
export async function openAndRecognise(
  open: Opener,
  given: ColumnPlan | null,
  saved: readonly KnownPlan[],
  isCut = false,
): Promise<{ file: OpenedFile; plan: ColumnPlan | null; recognised: KnownPlan | null }> {
  const file = await openFile(open, given ?? {}, isCut);
  if (given) return { file, plan: given, recognised: null };
  const recognised = recognisePlan(file, saved);
  if (!recognised) return { file, plan: null, recognised: null };
  const { plan } = recognised;
  // The header was found on the sheet that was opened, whatever it was called last time.
  if (file.kind !== 'text') return { file, plan, recognised };
  return { file: await openFile(open, plan, isCut), plan, recognised };
}

/** The saved plan that was made for a file with this header, or null; of several the one saved last. */
export function recognisePlan(file: OpenedFile, saved: readonly KnownPlan[]): KnownPlan | null {
  if (saved.length === 0) return null;
  const byHeader = new Map(
    [...saved].sort((a, b) => a.id - b.id).map((plan) => [plan.headerFingerprint, plan]),
  );
  for (const { rows } of file.cuts) {
    for (const { cells } of rows.slice(0, headerWithin)) {
      const found = byHeader.get(fingerprintOf(cells));
      if (found) return found;
    }
  }
  return null;
}
