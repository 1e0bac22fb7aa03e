import { useQuery } from '@tanstack/react-query';
import { addDays } from 'date-fns';
import { useState } from 'react';
import { Form } from 'react-aria-components';
import { ApiError } from '../api/api-error.ts';
import {
  accessKeysQuery,
  useCreateAccessKey,
  useRevokeAccessKey,
} from '../features/access-keys/queries.ts';
import { formatMoment } from '../lib/format.ts';
import { Button } from '../ui/button.tsx';
import { ConfirmDialog } from '../ui/confirm-dialog.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { PageHeading, PanelHeading, Sentence } from '../ui/heading.tsx';
import { Loading } from '../ui/loading.tsx';
import { Notice, ProblemNotice } from '../ui/notice.tsx';
import { Select } from '../ui/select.tsx';
import { TextField } from '../ui/text-field.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

const never = '';
const expiries = [
  { value: '90', label: 'in 90 days' },
  { value: '365', label: 'in a year' },
  { value: never, label: 'never' },
];

const expiryOf = (days: string): string | null =>
  days === never ? null : addDays(new Date(), Number(days)).toISOString();

export function Component() {
  useTitle('Access keys');
  const site = useSiteOfPage();
  const keys = useQuery(accessKeysQuery(site.id));
  const create = useCreateAccessKey(site.id);
  const revoke = useRevokeAccessKey(site.id);
  const [name, setName] = useState('');
  const [days, setDays] = useState('365');
  return (
    <div className="flex max-w-3xl flex-col gap-6">
      <PageHeading>Access keys</PageHeading>
      <Sentence>
        A machine with an access key may upload to this site and read its uploads, and nothing else.
      </Sentence>
      <Form
        className="flex flex-wrap items-end gap-3"
        onSubmit={(event) => {
          event.preventDefault();
          create.mutate({ name, expiresAt: expiryOf(days) }, { onSuccess: () => setName('') });
        }}
      >
        <TextField label="What the key is for" isRequired value={name} onChange={setName} />
        <Select label="Expires" value={days} choices={expiries} onChange={setDays} />
        <Button type="submit" kind="main" isDisabled={create.isPending}>
          Make an access key
        </Button>
      </Form>
      {create.error instanceof ApiError ? <ProblemNotice problem={create.error.problem} /> : null}
      {create.data ? (
        <Notice kind="warning">
          Copy the key of “{create.data.name}” now, it is shown this once:{' '}
          <code className="break-all select-all">{create.data.key}</code>
        </Notice>
      ) : null}
      <section>
        <PanelHeading>Keys of this site</PanelHeading>
        {keys.error instanceof ApiError ? <ProblemNotice problem={keys.error.problem} /> : null}
        {keys.isPending ? <Loading what="the keys" /> : null}
        {keys.data?.length === 0 ? (
          <EmptyState title="There is no access key yet.">
            Make one where a machine is to upload by itself.
          </EmptyState>
        ) : null}
        <ul>
          {keys.data?.map((key) => (
            <li
              key={key.id}
              className="flex flex-wrap items-center justify-between gap-3 border-b border-hair py-2"
            >
              <span>
                <strong>{key.name}</strong>{' '}
                <span className="text-soft">
                  made {formatMoment(key.createdAt, site.timeZone)}
                  {key.lastUsedAt
                    ? `, last used ${formatMoment(key.lastUsedAt, site.timeZone)}`
                    : ', not used yet'}
                  {key.expiresAt && !key.revokedAt
                    ? `, ${new Date(key.expiresAt) > new Date() ? 'expires' : 'expired'} ${formatMoment(key.expiresAt, site.timeZone)}`
                    : ''}
                  {key.revokedAt ? `, revoked ${formatMoment(key.revokedAt, site.timeZone)}` : ''}
                </span>
              </span>
              {key.revokedAt ? null : (
                <ConfirmDialog
                  trigger="Revoke this key"
                  title={`Revoke “${key.name}”?`}
                  action="Revoke this key"
                  onConfirm={() => revoke.mutate(key.id)}
                >
                  Whatever uploads with it is refused from now on.
                </ConfirmDialog>
              )}
            </li>
          ))}
        </ul>
      </section>
    </div>
  );
}
