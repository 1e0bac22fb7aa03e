import { useQuery } from '@tanstack/react-query';
import { useId, useState } from 'react';
import { useNavigate } from 'react-router-dom';
import { jobKeysQuery } from '../features/jobs/queries.ts';
import { paths } from './paths.ts';

/** Finds a job by the beginning of its key. */
export function JobSearch({ siteId, search }: { siteId: number; search: string }) {
  const [begins, setBegins] = useState('');
  const navigate = useNavigate();
  const id = useId();
  const { data } = useQuery({ ...jobKeysQuery(siteId, begins), enabled: begins.trim() !== '' });
  return (
    <form
      role="search"
      className="no-print"
      onSubmit={(event) => {
        event.preventDefault();
        const key = begins.trim();
        if (key) void navigate(paths.job(siteId, key) + search);
      }}
    >
      <label htmlFor={id} className="sr-only">
        Find a job
      </label>
      <input
        id={id}
        type="search"
        list={`${id}-keys`}
        placeholder="Find a job …"
        value={begins}
        onChange={(event) => setBegins(event.target.value)}
        className="w-44 border-b border-ink bg-transparent px-1 py-1 text-ink placeholder:text-soft"
      />
      <datalist id={`${id}-keys`}>
        {data?.jobKeys.map((key) => (
          <option key={key} value={key} />
        ))}
      </datalist>
    </form>
  );
}
