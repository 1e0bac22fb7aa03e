import type { RowAccount } from '../../../shared/contracts/uploads.ts';
import { rowReasonSentence } from '../../../shared/row-reasons.ts';
import { formatCount, listed, plural } from '../../lib/format.ts';

/** The account of one upload: every row counted once, in words. */
export function RowAccountWords({ account }: { account: RowAccount }) {
  const parts = [
    [account.new, 'new'],
    [account.completing, 'completing'],
    [account.correcting, 'correcting'],
    [account.same, 'same as before'],
    [account.skipped, 'skipped'],
    [account.refused, 'refused'],
  ] as const;
  const words = parts
    .filter(([count]) => count > 0)
    .map(([count, word]) => `${formatCount(count)} ${word}`);
  return (
    <div className="flex flex-col gap-2">
      <p>
        {plural(account.rowsRead, 'row')} read: {listed(words) || 'nothing in them'}.
      </p>
      {account.voided > 0 ? (
        <p>
          {plural(account.voided, 'row')} of earlier uploads {account.voided === 1 ? 'is' : 'are'}{' '}
          voided: this file is the whole truth for its areas and its period.
        </p>
      ) : null}
      <Reasons title="Skipped" counts={account.skippedBy} />
      <Reasons title="Refused" counts={account.refusedBy} />
      <Reasons title="Accepted, worth knowing" counts={account.warnings} />
    </div>
  );
}

function Reasons({ title, counts }: { title: string; counts: Record<string, number> }) {
  const entries = Object.entries(counts).filter(([, count]) => count > 0);
  if (entries.length === 0) return null;
  return (
    <div>
      <strong>{title}</strong>
      <ul className="list-inside list-disc">
        {entries.map(([code, count]) => (
          <li key={code}>
            {formatCount(count)} × {rowReasonSentence(code)}
          </li>
        ))}
      </ul>
    </div>
  );
}
