import { useState } from 'react';
import { Form } from 'react-aria-components';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { useFirstAdmin } from './queries.ts';

/** The first organisation and its admin, for whoever holds the token from the server's log. */
export function FirstAdminForm({ token }: { token: string }) {
  const [given, setGiven] = useState({
    token,
    organisation: '',
    name: '',
    email: '',
    password: '',
  });
  const create = useFirstAdmin();
  const field = (name: keyof typeof given) => ({
    value: given[name],
    onChange: (value: string) => setGiven({ ...given, [name]: value }),
    isRequired: true,
  });
  return (
    <Form
      className="flex flex-col gap-4"
      onSubmit={(event) => {
        event.preventDefault();
        create.mutate(given);
      }}
    >
      <TextField label="Token from the server's log" {...field('token')} />
      <TextField label="Organisation" {...field('organisation')} />
      <TextField label="Your name" autoComplete="name" {...field('name')} />
      <TextField label="E-mail" type="email" autoComplete="username" {...field('email')} />
      <TextField
        label="Password"
        type="password"
        autoComplete="new-password"
        hint="At least 10 characters."
        minLength={10}
        {...field('password')}
      />
      {create.error instanceof ApiError ? <ProblemNotice problem={create.error.problem} /> : null}
      <Button type="submit" kind="main" isDisabled={create.isPending}>
        Make the organisation and its admin
      </Button>
    </Form>
  );
}
