import { useState } from 'react';
import { Form } from 'react-aria-components';
import { ApiError } from '../../api/api-error.ts';
import { Button } from '../../ui/button.tsx';
import { PanelHeading } from '../../ui/heading.tsx';
import { ProblemNotice } from '../../ui/notice.tsx';
import { TextField } from '../../ui/text-field.tsx';
import { useSession, useSignIn } from './queries.ts';

/** E-mail and password; on a demo, one account per role to fill in. */
export function SignInForm() {
  const { demoAccounts, demoPassword } = useSession();
  const [email, setEmail] = useState('');
  const [password, setPassword] = useState('');
  const signIn = useSignIn();
  return (
    <div className="flex flex-col gap-8">
      <Form
        className="flex flex-col gap-4"
        onSubmit={(event) => {
          event.preventDefault();
          signIn.mutate({ email, password });
        }}
      >
        <TextField
          label="E-mail"
          type="email"
          autoComplete="username"
          isRequired
          value={email}
          onChange={setEmail}
        />
        <TextField
          label="Password"
          type="password"
          autoComplete="current-password"
          isRequired
          value={password}
          onChange={setPassword}
        />
        {signIn.error instanceof ApiError ? <ProblemNotice problem={signIn.error.problem} /> : null}
        <Button type="submit" kind="main" isDisabled={signIn.isPending}>
          {signIn.isPending ? 'Signing in …' : 'Sign in'}
        </Button>
      </Form>
      {demoAccounts.length > 0 ? (
        <section>
          <PanelHeading>Accounts of this demo</PanelHeading>
          <ul className="flex flex-col">
            {demoAccounts.map((account) => (
              <li
                key={account.email}
                className="flex items-center justify-between gap-4 border-b border-hair py-2"
              >
                <span>
                  {account.email}
                  <br />
                  <span className="text-soft">
                    {account.role}, {account.organisation}
                  </span>
                </span>
                <Button
                  onPress={() => {
                    setEmail(account.email);
                    setPassword(demoPassword ?? '');
                  }}
                  aria-label={`Fill in ${account.email}`}
                >
                  Fill&nbsp;in
                </Button>
              </li>
            ))}
          </ul>
        </section>
      ) : null}
    </div>
  );
}
