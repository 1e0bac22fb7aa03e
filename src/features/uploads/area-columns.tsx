import { timeColumns, type AreaColumns } from '../../../shared/contracts/plan.ts';
import { Button } from '../../ui/button.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { Select } from '../../ui/select.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { columnLabels, headerChoices, nothing } from './column-selects.tsx';

type AreaDraft = Partial<AreaColumns>;

/** For each area of a row per job, which columns hold its times. */
export function AreaColumnsForm({
  header,
  areas,
  onChange,
}: {
  header: readonly string[];
  areas: readonly AreaDraft[];
  onChange: (areas: AreaDraft[]) => void;
}) {
  const choices = headerChoices(header);
  const change = (index: number, area: AreaDraft) =>
    onChange(areas.map((each, at) => (at === index ? area : each)));
  return (
    <section className="flex flex-col gap-3">
      <PanelHeading>Which columns hold the times of each area</PanelHeading>
      {areas.map((area, index) => (
        <fieldset
          // Areas are told apart by their place: a name may be in the making.
          key={index}
          className="grid grid-cols-2 items-end gap-3 lg:grid-cols-5"
        >
          <legend className="sr-only">Area {index + 1}</legend>
          <TextField
            label={`Area ${index + 1}`}
            value={area.area ?? ''}
            onChange={(name) => change(index, { ...area, area: name })}
          />
          {timeColumns.map((column) => (
            <Select
              key={column}
              label={columnLabels[column]}
              value={area[column] ?? nothing}
              choices={choices}
              onChange={(cell) => {
                const { [column]: _, ...others } = area;
                change(index, cell === nothing ? others : { ...others, [column]: cell });
              }}
            />
          ))}
          <Button onPress={() => onChange(areas.filter((_, at) => at !== index))}>
            Leave out {area.area ? `“${area.area}”` : `area ${index + 1}`}
          </Button>
        </fieldset>
      ))}
      <div>
        <Button onPress={() => onChange([...areas, { area: '' }])}>Add an area</Button>
      </div>
    </section>
  );
}
