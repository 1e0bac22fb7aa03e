import { DrizzleQueryError } from 'drizzle-orm';
import { expect, it } from 'vitest';
import { plainError } from '../../server/log.ts';

it('a failed statement is logged without the values bound to it', () => {
  const cause = Object.assign(new Error('duplicate key'), {
    code: '23505',
    constraint: 'person_email_unique',
    detail: 'Key (email)=(ada@northgate.example) already exists.',
  });
  const failed = new DrizzleQueryError(
    'insert into person values ($1, $2)',
    ['ada@northgate.example', 'a secret hash'],
    cause,
  );
  const logged = plainError(new Error('The person could not be added.', { cause: failed }));
  expect(logged).toMatchObject({
    message: 'The person could not be added.',
    cause: {
      query: 'insert into person values ($1, $2)',
      cause: { code: '23505', constraint: 'person_email_unique', message: 'duplicate key' },
    },
  });
  expect(JSON.stringify(logged)).not.toMatch(/secret hash|northgate/);
  expect(JSON.stringify(logged)).toContain('log.test');
});
