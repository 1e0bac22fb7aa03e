import { z } from 'zod';
import { roles } from '../permissions.ts';
import { contract, nameSchema } from './contract.ts';

export const emailSchema = z.string().trim().toLowerCase().pipe(z.email().max(254));
/** Length only; the rules for a new password are stricter. */
export const passwordSchema = z.string().min(1).max(200);

export const userSchema = z.object({ id: z.int(), email: z.string(), name: z.string() });
export const organisationSchema = z.object({
  id: z.int(),
  name: z.string(),
  role: z.enum(roles),
  /** When a guest's access ends; null where it does not. */
  endsAt: z.string().nullable(),
});
export const sessionSchema = z.object({
  user: userSchema,
  organisations: z.array(organisationSchema),
});
export type SessionAnswer = z.infer<typeof sessionSchema>;

export const signIn = contract({
  name: 'signIn',
  method: 'post',
  path: '/api/auth/sign-in',
  summary: 'Signs a person in and sets the session cookie',
  action: 'session.open',
  body: z.object({ email: emailSchema, password: passwordSchema }),
  response: sessionSchema,
});

export const signOut = contract({
  name: 'signOut',
  method: 'post',
  path: '/api/auth/sign-out',
  summary: 'Ends this session',
  action: 'session.close',
  response: z.undefined(),
  responseKind: 'empty',
  status: 204,
});

export const signOutEverywhere = contract({
  name: 'signOutEverywhere',
  method: 'post',
  path: '/api/auth/sign-out-everywhere',
  summary: 'Ends every session of the signed-in person',
  action: 'session.close-all',
  response: z.undefined(),
  responseKind: 'empty',
  status: 204,
});

/** What a signed-out page needs to know: whether anyone is signed in, and what the sign-in page may offer. */
export const readSession = contract({
  name: 'readSession',
  method: 'get',
  path: '/api/auth/session',
  summary: 'Who is signed in, if anyone',
  action: 'session.read',
  response: z.object({
    session: sessionSchema.nullable(),
    /** One account per role with its password, on a demo only. */
    demoAccounts: z.array(
      z.object({ email: z.string(), role: z.enum(roles), organisation: z.string() }),
    ),
    demoPassword: z.string().nullable(),
    /** True until the first admin was made: the first-admin page is open to the bearer of the token. */
    awaitsFirstAdmin: z.boolean(),
  }),
});

/** Rule for a new password. */
export const newPasswordSchema = z
  .string()
  .min(10, 'Use at least 10 characters.')
  .max(200, 'Use at most 200 characters.');

export const createFirstAdmin = contract({
  name: 'createFirstAdmin',
  method: 'post',
  path: '/api/auth/first-admin',
  summary: 'Makes the first organisation and its admin, with the one-time token from the log',
  action: 'first-admin.create',
  body: z.object({
    token: z.string().min(1).max(200),
    organisation: nameSchema,
    name: nameSchema,
    email: emailSchema,
    password: newPasswordSchema,
  }),
  response: sessionSchema,
  status: 201,
});
