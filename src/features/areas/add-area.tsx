import { useState } from 'react';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { useAddArea } from './queries.ts';

/** Makes an area that no file names yet, at the end of the flow. */
export function AddArea({ siteId }: { siteId: number }) {
  const [name, setName] = useState('');
  const add = useAddArea(siteId);
  return (
    <form
      className="no-print flex flex-col gap-3"
      onSubmit={(event) => {
        event.preventDefault();
        if (!add.isPending) add.mutate(name, { onSuccess: () => setName('') });
      }}
    >
      <div className="flex flex-wrap items-end gap-3">
        <TextField label="Name of a new area" isRequired value={name} onChange={setName} />
        <Button type="submit" isDisabled={name.trim() === ''}>
          Add this area
        </Button>
      </div>
      {add.error instanceof ApiError ? <ProblemNotice problem={add.error.problem} /> : null}
    </form>
  );
}
