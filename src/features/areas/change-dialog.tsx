import { useState } from 'react';
import type { Area } from '../../../shared/contracts/areas.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { localDay, zoneRules } from '../../../shared/local-time.ts';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { FormDialog } from '../../ui/form-dialog.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { DayField } from './day-field.tsx';
import { useChangeArea, type AreaChanges } from './queries.ts';
import { startOfDay } from './start-of-day.ts';

/** Renames an area, and says how many servers it has from when on. */
export function ChangeDialog({ site, area }: { site: Site; area: Area }) {
  return (
    <FormDialog trigger="Change" of={area.name} title={`Change “${area.name}”`}>
      {(close) => <ChangeForm site={site} area={area} onDone={close} />}
    </FormDialog>
  );
}

function ChangeForm({ site, area, onDone }: { site: Site; area: Area; onDone: () => void }) {
  const [name, setName] = useState(area.name);
  const [servers, setServers] = useState(area.servers === null ? '' : String(area.servers));
  const [day, setDay] = useState(sinceDay(area, site));
  const change = useChangeArea(site.id, area.id);
  const from = startOfDay(day, site.timeZone);
  const wrongDay = day !== '' && from === null;
  const wrongServers = servers.trim() !== '' && !/^[1-9]\d{0,4}$/.test(servers.trim());
  return (
    <form
      className="flex flex-col gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        const isSameDay = day === sinceDay(area, site);
        const changes = changesOf(area, name, servers.trim(), isSameDay ? area.serversFrom : from);
        if (Object.keys(changes).length === 0) onDone();
        else if (!change.isPending) change.mutate(changes, { onSuccess: onDone });
      }}
    >
      <TextField
        label="Name"
        isRequired
        value={name}
        onChange={setName}
        hint="The names under which files know it stay its own."
      />
      <TextField
        label="Servers"
        inputMode="numeric"
        value={servers}
        onChange={setServers}
        error={wrongServers ? 'Use a whole number from 1 on, or leave it empty.' : undefined}
        hint="How many jobs it can have in process at once."
      />
      {servers.trim() === '' ? null : (
        <DayField
          label={`Servers since this day (${site.timeZone}); empty for since ever`}
          value={day}
          isWrong={wrongDay}
          onChange={setDay}
        />
      )}
      {change.error instanceof ApiError ? <ProblemNotice problem={change.error.problem} /> : null}
      <div className="flex flex-wrap justify-end gap-3">
        <Button onPress={onDone}>Leave it as it is</Button>
        <Button
          type="submit"
          kind="main"
          isDisabled={wrongDay || wrongServers || name.trim() === ''}
        >
          Keep these changes
        </Button>
      </div>
    </form>
  );
}

/** The day since which the area has its servers; empty for since ever. */
const sinceDay = ({ serversFrom }: Area, { timeZone }: Site): string =>
  serversFrom === null ? '' : localDay(zoneRules(timeZone), Date.parse(serversFrom));

/** What differs from the area as it is. */
function changesOf(area: Area, name: string, typed: string, from: string | null): AreaChanges {
  const servers = typed === '' ? null : Number(typed);
  const isSame = servers === area.servers && (servers === null || from === area.serversFrom);
  return {
    ...(name.trim() === area.name ? {} : { name }),
    ...(isSame ? {} : { servers }),
    ...(isSame || servers === null || from === null ? {} : { serversFrom: from }),
  };
}
