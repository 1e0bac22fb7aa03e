import { useQuery } from '@tanstack/react-query';
import { useState, type ReactNode } from 'react';
import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import type { UploadPreview } from '../../../shared/contracts/uploads.ts';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { Loading } from '../../ui/loading.tsx';
import { Notice, ProblemNotice } from '../../ui/notice.tsx';
import {
  draftOf,
  emptyDraft,
  planOf,
  planToSave,
  whatIsMissing,
  type PlanDraft,
} from './plan-draft.ts';
import { PlanForm } from './plan-form.tsx';
import { PreviewTable } from './preview-table.tsx';
import type { PreviewBy } from './queries.ts';
import { delimiterWords, encodingWords } from './reading-settings.tsx';
import { SavedPlans } from './saved-plans.tsx';

/** What is seen in a file, how it is to be read, what comes of it on its first rows, and off it goes. */
export function PreparedReading({
  site,
  title,
  previewBy,
  firstPlan,
  action,
  isPending,
  error,
  onRead,
  onLeave,
  leave,
}: {
  site: Site;
  title: ReactNode;
  previewBy: PreviewBy;
  /** The plan to begin with; null for the one that is detected. */
  firstPlan: ColumnPlan | null;
  action: string;
  isPending: boolean;
  error: Error | null;
  onRead: (plan: ColumnPlan) => void;
  onLeave: () => void;
  leave: string;
}) {
  const [changed, setChanged] = useState<PlanDraft | null>(firstPlan && draftOf(firstPlan));
  const guess = useQuery(previewBy(null));
  const plan = changed ? planOf(changed) : (guess.data?.plan ?? null);
  const asked = useQuery({
    ...previewBy(changed ? plan : null),
    enabled: changed === null || plan !== null,
    // What was shown stays until the new reading is there.
    placeholderData: (before) => before,
  });
  const preview = asked.data ?? guess.data;
  if (guess.error instanceof ApiError && !preview) {
    return (
      <div className="flex flex-col items-start gap-3">
        <ProblemNotice problem={guess.error.problem} />
        <Button onPress={onLeave}>{leave}</Button>
      </div>
    );
  }
  if (!preview) return <Loading what="the first rows" />;
  const draft = changed ?? (preview.plan ? draftOf(preview.plan) : emptyDraft(site.timeZone));
  return (
    <div className="flex flex-col gap-5">
      <p>
        {title} <span className="text-soft">{formInWords(preview)}</span>
      </p>
      <ul className="list-inside list-disc text-soft">
        {preview.reasons.map(({ about, reason }) => (
          <li key={`${about} ${reason}`}>{reason}</li>
        ))}
      </ul>
      <PlanForm preview={preview} draft={draft} onChange={setChanged} />
      {asked.error instanceof ApiError ? <ProblemNotice problem={asked.error.problem} /> : null}
      <PreviewTable rows={preview.rows} fileKind={preview.fileKind} timeZone={site.timeZone} />
      {plan === null ? <Notice kind="warning">{whatIsMissing[draft.shape]}</Notice> : null}
      <SavedPlans
        siteId={site.id}
        header={preview.header}
        plan={plan && planToSave(plan, guess.data?.plan ?? null)}
        recognised={preview.recognised}
        onChoose={(saved) => setChanged(draftOf(saved))}
      />
      {error instanceof ApiError ? <ProblemNotice problem={error.problem} /> : null}
      <div className="flex gap-3">
        <Button
          kind="main"
          isDisabled={plan === null || isPending}
          onPress={() => {
            if (plan) onRead(plan);
          }}
        >
          {isPending ? 'Sending …' : action}
        </Button>
        <Button onPress={onLeave}>{leave}</Button>
      </div>
    </div>
  );
}

function formInWords({ fileKind, encoding, delimiter, plan, sheets }: UploadPreview): string {
  switch (fileKind) {
    case 'text':
      return [
        encoding ? encodingWords[encoding] : null,
        delimiter ? `cut at each ${delimiterWords[delimiter]}` : null,
      ]
        .filter((word) => word !== null)
        .join(', ');
    case 'workbook':
      return `a workbook, sheet ${plan?.sheet ?? sheets[0] ?? ''}`;
    case 'xes':
      return 'an event log in XES';
  }
}
