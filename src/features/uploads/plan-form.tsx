import {
  optionalColumns,
  timeColumns,
  type ColumnPlan,
  type StayColumns,
} from '../../../shared/contracts/plan.ts';
import { ComboBox } from '../../ui/combo-box.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { Select } from '../../ui/select.tsx';
import { TextField } from '../../ui/text-field.tsx';

const zones = Intl.supportedValuesOf('timeZone');
const nothing = '';

const columnLabels: Record<keyof StayColumns, string> = {
  job: 'Job',
  area: 'Area',
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

/** A plan in the making: the columns may still be missing. */
export type PlanDraft = Omit<ColumnPlan, 'columns'> & { columns: Partial<StayColumns> };

/** Which column holds what, and how its times are read; changes show at once on the rows. */
export function PlanForm({
  header,
  draft,
  onChange,
}: {
  header: readonly string[];
  draft: PlanDraft;
  onChange: (draft: PlanDraft) => void;
}) {
  const choices = [
    { value: nothing, label: 'not in this file' },
    ...header.map((cell) => ({ value: cell, label: cell })),
  ];
  const setColumn = (column: keyof StayColumns, cell: string) => {
    const columns = { ...draft.columns };
    if (cell === nothing) delete columns[column];
    else columns[column] = cell;
    onChange({ ...draft, columns });
  };
  const columnSelect = (column: keyof StayColumns) => (
    <Select
      key={column}
      label={columnLabels[column]}
      value={draft.columns[column] ?? nothing}
      choices={choices}
      onChange={(cell) => setColumn(column, cell)}
    />
  );
  return (
    <div className="flex flex-col gap-4">
      <PanelHeading>Which column holds what</PanelHeading>
      <div className="grid grid-cols-2 gap-3 lg:grid-cols-5">
        {(['job', 'area', ...timeColumns] as const).map(columnSelect)}
      </div>
      <details>
        <summary className="cursor-pointer">More columns</summary>
        <div className="mt-3 grid grid-cols-2 gap-3 lg:grid-cols-5">
          {optionalColumns.map(columnSelect)}
        </div>
      </details>
      <PanelHeading>How it is read</PanelHeading>
      <div className="grid gap-3 sm:grid-cols-2 lg:grid-cols-3">
        <ComboBox
          key={draft.timeZone}
          label="Time zone of times without an offset"
          value={draft.timeZone}
          choices={zones}
          onChange={(timeZone) => onChange({ ...draft, timeZone })}
        />
        <TextField
          label="Time format"
          hint="auto, or a pattern such as dd.MM.yyyy HH:mm"
          value={draft.timeFormat}
          onChange={(timeFormat) => onChange({ ...draft, timeFormat })}
        />
        <Select
          label="Areas that are not known yet"
          value={draft.unknownAreas}
          choices={[
            { value: 'add', label: 'add them' },
            { value: 'refuse', label: 'refuse their rows' },
          ]}
          onChange={(value) =>
            onChange({ ...draft, unknownAreas: value === 'refuse' ? 'refuse' : 'add' })
          }
        />
      </div>
    </div>
  );
}
