import { useQuery } from '@tanstack/react-query';
import { useState } from 'react';
import type { Area, Areas } from '../../../shared/contracts/areas.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { ApiError } from '../../api/api-error.ts';
import { formatDay } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { FormDialog } from '../../ui/form-dialog.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { Select } from '../../ui/select.tsx';
import { DayField } from './day-field.tsx';
import { loopsQuery, useMoveArea } from './queries.ts';
import { startOfDay } from './start-of-day.ts';
import { consequences, shownAreas } from './words.ts';

interface Given {
  site: Site;
  all: Areas;
  area: Area;
  /** The area that is offered first. */
  target?: Area;
}

/** Lets an area's rows count for another: all of them, or from a day on. */
export function MoveDialog({ trigger, ...given }: Given & { trigger: string }) {
  return (
    <FormDialog
      trigger={trigger}
      of={given.area.name}
      title={`Let rows of “${given.area.name}” count as another area`}
    >
      {(close) => <MoveForm {...given} onDone={close} />}
    </FormDialog>
  );
}

function MoveForm({ site, all, area, target: offered, onDone }: Given & { onDone: () => void }) {
  const others = shownAreas(all).filter((each) => each.id !== area.id);
  const [targetId, setTargetId] = useState(offered?.id ?? others[0]?.id ?? 0);
  const [isDated, setDated] = useState(false);
  const [day, setDay] = useState('');
  const loops = useQuery(loopsQuery(site.id)).data ?? [];
  const move = useMoveArea(site.id);
  const target = others.find((each) => each.id === targetId);
  const from = isDated ? startOfDay(day, site.timeZone) : null;
  const isReady = target !== undefined && (!isDated || from !== null);
  return (
    <form
      className="flex flex-col gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        if (isReady && !move.isPending)
          // The button is not disabled meanwhile: it would lose the focus, and Escape with it.
          move.mutate({ areaId: area.id, targetAreaId: targetId, from }, { onSuccess: onDone });
      }}
    >
      <Select
        label="They count as"
        value={String(targetId)}
        choices={others.map((each) => ({ value: String(each.id), label: each.name }))}
        onChange={(value) => setTargetId(Number(value))}
      />
      <WhichRows isDated={isDated} onChange={setDated} />
      {isDated ? (
        <DayField
          label={`From the beginning of this day (${site.timeZone})`}
          value={day}
          isWrong={day !== '' && from === null}
          onChange={setDay}
        />
      ) : null}
      <div role="status" className="flex flex-col gap-2">
        {isReady
          ? consequences({
              ...{ area, target, from, loops },
              moves: all.moves,
              timeZone: site.timeZone,
            }).map((sentence) => <p key={sentence}>{sentence}</p>)
          : null}
      </div>
      {move.error instanceof ApiError ? <ProblemNotice problem={move.error.problem} /> : null}
      <div className="flex flex-wrap justify-end gap-3">
        <Button onPress={onDone}>Leave it as it is</Button>
        <Button type="submit" kind="main" isDisabled={!isReady}>
          {isDated
            ? `Move them from ${from === null ? 'a day on' : formatDay(from, site.timeZone)}`
            : 'Merge them'}
        </Button>
      </div>
    </form>
  );
}

function WhichRows({
  isDated,
  onChange,
}: {
  isDated: boolean;
  onChange: (isDated: boolean) => void;
}) {
  const choices = [
    { dated: false, label: 'All rows: the two names are one area' },
    { dated: true, label: 'Rows from a day on: the name means another area since then' },
  ];
  return (
    <fieldset className="flex flex-col gap-1">
      <legend className="mb-1 text-soft">Which rows</legend>
      {choices.map(({ dated, label }) => (
        <label key={label} className="flex items-start gap-2">
          <input
            type="radio"
            name="which-rows"
            checked={isDated === dated}
            onChange={() => onChange(dated)}
            className="mt-1"
          />
          {label}
        </label>
      ))}
    </fieldset>
  );
}
