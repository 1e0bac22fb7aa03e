import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { columnPlanSchema, type ColumnPlan } from '../../../shared/contracts/plan.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { ApiError } from '../../api/api-error.ts';
import { formatBytes } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { FileDrop } from '../../ui/file-drop.tsx';
import { Loading } from '../../ui/loading.tsx';
import { Notice, ProblemNotice } from '../../ui/notice.tsx';
import { PlanForm, type PlanDraft } from './plan-form.tsx';
import { PreviewTable } from './preview-table.tsx';
import { previewQuery, useUpload } from './queries.ts';

/** From a dropped file to its reading: what is seen in it, how it is read, and off it goes. */
export function NewUpload({ site }: { site: Site }) {
  const [file, setFile] = useState<File | null>(null);
  return file ? (
    <PreparedUpload
      key={`${file.name} ${file.lastModified}`}
      site={site}
      file={file}
      onDone={() => setFile(null)}
    />
  ) : (
    <FileDrop
      label="Drop an export here"
      hint="CSV with one row per stay: a job at an area, with its times."
      onFile={setFile}
    />
  );
}

function PreparedUpload({ site, file, onDone }: { site: Site; file: File; onDone: () => void }) {
  const [changed, setChanged] = useState<PlanDraft | null>(null);
  const guess = useQuery(previewQuery(site.id, file, null));
  const plan = changed ? wholePlan(changed) : (guess.data?.plan ?? null);
  const preview = useQuery({
    ...previewQuery(site.id, file, changed ? plan : null),
    enabled: changed === null || plan !== null,
  });
  const upload = useUpload(site.id);
  if (guess.error instanceof ApiError)
    return (
      <div className="flex flex-col items-start gap-3">
        <ProblemNotice problem={guess.error.problem} />
        <Button onPress={onDone}>Choose another file</Button>
      </div>
    );
  if (!guess.data) return <Loading what="the first rows" />;
  const draft = changed ?? guess.data.plan ?? emptyDraft(site);
  return (
    <div className="flex flex-col gap-5">
      <p>
        <strong>{file.name}</strong>{' '}
        <span className="text-soft">
          {formatBytes(file.size)}
          {guess.data.delimiter ? `, delimiter ${delimiterWord(guess.data.delimiter)}` : ''}
        </span>
      </p>
      <ul className="list-inside list-disc text-soft">
        {guess.data.reasons.map(({ about, reason }) => (
          <li key={`${about} ${reason}`}>{reason}</li>
        ))}
      </ul>
      <PlanForm header={guess.data.header} draft={draft} onChange={setChanged} />
      {preview.error instanceof ApiError ? (
        <ProblemNotice problem={preview.error.problem} />
      ) : preview.data ? (
        <PreviewTable rows={preview.data.rows} timeZone={site.timeZone} />
      ) : null}
      {plan === null ? (
        <Notice kind="warning">
          Name the columns of the job, of the area, and of at least one time.
        </Notice>
      ) : null}
      {upload.error instanceof ApiError ? <ProblemNotice problem={upload.error.problem} /> : null}
      <div className="flex gap-3">
        <Button
          kind="main"
          isDisabled={plan === null || upload.isPending}
          onPress={() => {
            if (plan) upload.mutate({ file, plan }, { onSuccess: onDone });
          }}
        >
          {upload.isPending ? 'Sending …' : 'Read this file'}
        </Button>
        <Button onPress={onDone}>Choose another file</Button>
      </div>
    </div>
  );
}

function wholePlan(draft: PlanDraft): ColumnPlan | null {
  const checked = columnPlanSchema.safeParse(draft);
  return checked.success ? checked.data : null;
}

const emptyDraft = (site: Site): PlanDraft => ({
  shape: 'stay',
  columns: {},
  timeZone: site.timeZone,
  timeFormat: 'auto',
  unknownAreas: 'add',
  mode: 'merge',
});

const delimiterWord = (delimiter: string) =>
  ({ ',': 'comma', ';': 'semicolon', '\t': 'tab', '|': 'pipe' })[delimiter] ?? delimiter;
