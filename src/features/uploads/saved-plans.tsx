import { useState } from 'react';
import { Form } from 'react-aria-components';
import { useQuery } from '@tanstack/react-query';
import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { Notice, ProblemNotice } from '../../ui/notice.tsx';
import { Select } from '../../ui/select.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { columnPlansQuery, useChangeColumnPlan, useSaveColumnPlan } from './plan-queries.ts';

/** Chooses a saved plan to read by, and saves the plan in hand by a name. */
export function SavedPlans({
  siteId,
  header,
  plan,
  recognised,
  onChoose,
}: {
  siteId: number;
  header: readonly string[];
  /** The plan in hand as it would be saved; null while it is not whole. */
  plan: ColumnPlan | null;
  recognised: { id: number; name: string } | null;
  onChoose: (plan: ColumnPlan) => void;
}) {
  const saved = useQuery(columnPlansQuery(siteId));
  const [chosenId, setChosenId] = useState(recognised ? String(recognised.id) : '');
  const chosen = saved.data?.find(({ id }) => String(id) === chosenId);
  return (
    <section className="flex flex-wrap items-end gap-3">
      {saved.data && saved.data.length > 0 ? (
        <Select
          label="Read by the saved plan"
          value={chosen ? chosenId : ''}
          choices={[
            { value: '', label: 'none of them' },
            ...saved.data.map(({ id, name }) => ({ value: String(id), label: name })),
          ]}
          onChange={(id) => {
            setChosenId(id);
            const found = saved.data.find((each) => String(each.id) === id);
            if (found) onChoose(found.plan);
          }}
        />
      ) : null}
      <SavePlan
        key={chosen?.id ?? 'new'}
        siteId={siteId}
        header={header}
        plan={plan}
        chosen={chosen ?? null}
      />
    </section>
  );
}

function SavePlan({
  siteId,
  header,
  plan,
  chosen,
}: {
  siteId: number;
  header: readonly string[];
  plan: ColumnPlan | null;
  chosen: { id: number; name: string } | null;
}) {
  const [name, setName] = useState(chosen?.name ?? '');
  const save = useSaveColumnPlan(siteId);
  const change = useChangeColumnPlan(siteId);
  const error = save.error ?? change.error;
  const done = save.data ?? change.data;
  return (
    <>
      <Form
        className="flex flex-wrap items-end gap-3"
        onSubmit={(event) => {
          event.preventDefault();
          if (!plan) return;
          const body = { name, plan, header: [...header] };
          if (chosen) change.mutate({ id: chosen.id, body });
          else save.mutate(body);
        }}
      >
        <TextField label="Name of this plan" value={name} onChange={setName} />
        <Button
          type="submit"
          isDisabled={plan === null || name.trim() === '' || save.isPending || change.isPending}
        >
          {chosen ? `Change “${chosen.name}”` : 'Save this plan'}
        </Button>
      </Form>
      {done ? (
        <Notice kind="info">
          “{done.name}” is saved. The next file with this header is read by it.
        </Notice>
      ) : null}
      {error instanceof ApiError ? <ProblemNotice problem={error.problem} /> : null}
    </>
  );
}
