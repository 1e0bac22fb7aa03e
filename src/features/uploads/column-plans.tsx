import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import { Form } from 'react-aria-components';
import type { SavedPlan } from '../../../shared/contracts/column-plans.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { ApiError } from '../../api/api-error.ts';
import { formatMoment } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { ConfirmDialog } from '../../ui/confirm-dialog.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { PlanInWords } from './plan-in-words.tsx';
import { columnPlansQuery, useChangeColumnPlan, useRetireColumnPlan } from './plan-queries.ts';

/** The saved column plans of a site; nothing where there is none. */
export function ColumnPlans({ site, mayChange }: { site: Site; mayChange: boolean }) {
  const plans = useQuery(columnPlansQuery(site.id));
  if (plans.error instanceof ApiError) return <ProblemNotice problem={plans.error.problem} />;
  if (!plans.data || plans.data.length === 0) return null;
  return (
    <section>
      <PanelHeading>Column plans of this site</PanelHeading>
      <ul>
        {plans.data.map((plan) => (
          <ColumnPlanItem key={plan.id} plan={plan} site={site} mayChange={mayChange} />
        ))}
      </ul>
    </section>
  );
}

function ColumnPlanItem({
  plan,
  site,
  mayChange,
}: {
  plan: SavedPlan;
  site: Site;
  mayChange: boolean;
}) {
  const change = useChangeColumnPlan(site.id);
  const retire = useRetireColumnPlan(site.id);
  const [name, setName] = useState(plan.name);
  const error = change.error ?? retire.error;
  return (
    <li className="flex flex-col gap-2 border-b border-hair py-3">
      <p>
        <strong>{plan.name}</strong>{' '}
        <span className="text-soft">
          saved {formatMoment(plan.savedAt, site.timeZone)}
          {plan.savedBy ? ` by ${plan.savedBy}` : ''}
        </span>
      </p>
      <PlanInWords plan={plan.plan} />
      {error instanceof ApiError ? <ProblemNotice problem={error.problem} /> : null}
      {mayChange ? (
        <div className="flex flex-wrap items-end gap-3">
          <Form
            className="flex flex-wrap items-end gap-3"
            onSubmit={(event) => {
              event.preventDefault();
              change.mutate({ id: plan.id, body: { name } });
            }}
          >
            <TextField label={`New name of “${plan.name}”`} value={name} onChange={setName} />
            <Button type="submit" isDisabled={name.trim() === '' || name === plan.name}>
              Rename this plan
            </Button>
          </Form>
          <ConfirmDialog
            trigger="Take this plan out of use"
            title={`Take “${plan.name}” out of use?`}
            action="Take this plan out of use"
            onConfirm={() => retire.mutate(plan.id)}
          >
            Files of its kind are no longer recognised by it. Uploads keep the plan that read them.
          </ConfirmDialog>
        </div>
      ) : null}
    </li>
  );
}
