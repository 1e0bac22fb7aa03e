import { shapes, type Shape } from '../../../shared/contracts/plan.ts';
import type { UploadPreview } from '../../../shared/contracts/uploads.ts';
import { Select } from '../../ui/select.tsx';
import { AreaColumnsForm } from './area-columns.tsx';
import { ColumnSelects } from './column-selects.tsx';
import type { PlanDraft } from './plan-draft.ts';
import { ReadingSettings } from './reading-settings.tsx';
import { WordMeanings } from './word-meanings.tsx';

const shapeLabels: Readonly<Record<Shape, string>> = {
  stay: 'a stay: a job at an area, with its times',
  event: 'an event: a job arrived, started or finished at an area',
  job: 'a job, with columns for each area',
};

const eventMeanings = [
  { value: 'arrived', label: 'arrival' },
  { value: 'started', label: 'start' },
  { value: 'finished', label: 'finish' },
  { value: 'scrapped', label: 'scrapped: ends the stay' },
  { value: 'cancelled', label: 'cancelled: ends the stay' },
  { value: 'ignored', label: 'tells nothing of a stay' },
] as const;
const statusMeanings = [
  { value: 'scrapped', label: 'scrapped: ends the stay' },
  { value: 'cancelled', label: 'cancelled: ends the stay' },
] as const;

/** What a row tells, which column holds what, and how it is read; changes show at once on the rows. */
export function PlanForm({
  preview,
  draft,
  onChange,
}: {
  preview: UploadPreview;
  draft: PlanDraft;
  onChange: (draft: PlanDraft) => void;
}) {
  return (
    <div className="flex flex-col gap-5">
      <div className="max-w-xl">
        <Select
          label="A row tells"
          value={draft.shape}
          choices={shapes.map((value) => ({ value, label: shapeLabels[value] }))}
          onChange={(value) => {
            const shape = shapes.find((each) => each === value);
            if (shape) onChange({ ...draft, shape });
          }}
        />
      </div>
      <ColumnSelects header={preview.header} draft={draft} onChange={onChange} />
      {draft.shape === 'job' ? (
        <AreaColumnsForm
          header={preview.header}
          areas={draft.areas ?? []}
          onChange={(areas) => onChange({ ...draft, areas })}
        />
      ) : null}
      {draft.shape === 'event' ? (
        <WordMeanings
          title="What each event means"
          words={preview.words.event}
          value={draft.eventWords ?? eventWordsOf(preview)}
          meanings={eventMeanings}
          unexplained="not explained: refused"
          onChange={(eventWords) => onChange({ ...draft, eventWords })}
        />
      ) : null}
      {draft.columns.status ? (
        <WordMeanings
          title="What each status means"
          words={preview.words.status}
          value={draft.statusWords ?? preview.plan?.statusWords ?? {}}
          meanings={statusMeanings}
          unexplained="nothing of the kind"
          onChange={(statusWords) => onChange({ ...draft, statusWords })}
        />
      ) : null}
      <ReadingSettings preview={preview} draft={draft} onChange={onChange} />
    </div>
  );
}

const eventWordsOf = ({ plan }: UploadPreview) =>
  plan?.shape === 'event' ? (plan.eventWords ?? {}) : {};
