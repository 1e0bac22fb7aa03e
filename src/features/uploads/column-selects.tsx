import { optionalColumns } from '../../../shared/contracts/plan.ts';
import { PanelHeading } from '../../ui/heading.tsx';
import { Select } from '../../ui/select.tsx';
import { columnsOfShape, type ColumnName, type PlanDraft } from './plan-draft.ts';

export const nothing = '';

export const columnLabels: Readonly<Record<ColumnName, string>> = {
  job: 'Job',
  area: 'Area',
  event: 'Event',
  time: 'Time of the event',
  arrived: 'Arrival',
  started: 'Start',
  finished: 'Finish',
  record: 'Record id',
  quantity: 'Quantity',
  family: 'Family',
  due: 'Due',
  priority: 'Priority',
  workContent: 'Work content',
  value: 'Value',
  resource: 'Resource',
  status: 'Status',
  parent: 'Parent job',
};

/** The cells of a header as choices, and none of them. */
export const headerChoices = (header: readonly string[]) => [
  { value: nothing, label: 'not in this file' },
  ...header.filter((cell) => cell !== nothing).map((cell) => ({ value: cell, label: cell })),
];

/** Which column holds what. */
export function ColumnSelects({
  header,
  draft,
  onChange,
}: {
  header: readonly string[];
  draft: PlanDraft;
  onChange: (draft: PlanDraft) => void;
}) {
  const choices = headerChoices(header);
  const select = (column: ColumnName) => (
    <Select
      key={column}
      label={columnLabels[column]}
      value={draft.columns[column] ?? nothing}
      choices={choices}
      onChange={(cell) => {
        const { [column]: _, ...others } = draft.columns;
        const columns = cell === nothing ? others : { ...others, [column]: cell };
        onChange({ ...draft, columns });
      }}
    />
  );
  return (
    <section className="flex flex-col gap-3">
      <PanelHeading>Which column holds what</PanelHeading>
      <div className="grid grid-cols-2 gap-3 lg:grid-cols-5">
        {columnsOfShape[draft.shape].map(select)}
      </div>
      <details>
        <summary className="cursor-pointer">More columns</summary>
        <div className="mt-3 grid grid-cols-2 gap-3 lg:grid-cols-5">
          {optionalColumns.map(select)}
        </div>
      </details>
    </section>
  );
}
