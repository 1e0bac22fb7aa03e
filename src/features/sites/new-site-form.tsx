import { useState } from 'react';
import { Form } from 'react-aria-components';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { ComboBox } from '../../ui/combo-box.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { Select } from '../../ui/select.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { useCreateSite } from './queries.ts';

const zones = Intl.supportedValuesOf('timeZone');
const here = Intl.DateTimeFormat().resolvedOptions().timeZone;

export function NewSiteForm({
  organisations,
  onMade,
}: {
  organisations: readonly { id: number; name: string }[];
  onMade: (siteId: number) => void;
}) {
  const [name, setName] = useState('');
  const [timeZone, setTimeZone] = useState(zones.includes(here) ? here : 'Europe/Dublin');
  const [organisationId, setOrganisationId] = useState(organisations[0]?.id ?? 0);
  const create = useCreateSite();
  return (
    <Form
      className="flex max-w-md flex-col gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        create.mutate({ name, timeZone, organisationId }, { onSuccess: (site) => onMade(site.id) });
      }}
    >
      {organisations.length > 1 ? (
        <Select
          label="Organisation"
          value={String(organisationId)}
          choices={organisations.map((each) => ({ value: String(each.id), label: each.name }))}
          onChange={(value) => setOrganisationId(Number(value))}
        />
      ) : null}
      <TextField label="Name of the site" isRequired value={name} onChange={setName} />
      <ComboBox label="Time zone" value={timeZone} choices={zones} onChange={setTimeZone} />
      {create.error instanceof ApiError ? <ProblemNotice problem={create.error.problem} /> : null}
      <Button type="submit" kind="main" isDisabled={create.isPending}>
        Make the site
      </Button>
    </Form>
  );
}
