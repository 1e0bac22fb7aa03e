import { z } from 'zod';
import { contract, idParam, instantOrNull, instantSchema, nameSchema } from './contract.ts';
import { siteParams } from './sites.ts';

export const accessKeySchema = z.object({
  id: z.int(),
  name: z.string(),
  createdAt: instantSchema,
  /** From then on it opens nothing; null where it does not expire. */
  expiresAt: instantOrNull,
  /** To the minute. */
  lastUsedAt: instantOrNull,
  revokedAt: instantOrNull,
});

export const listAccessKeys = contract({
  name: 'listAccessKeys',
  method: 'get',
  path: '/api/sites/:siteId/access-keys',
  summary: 'The access keys of a site',
  action: 'access-key.read',
  params: siteParams,
  response: z.array(accessKeySchema),
});

export const createAccessKey = contract({
  name: 'createAccessKey',
  method: 'post',
  path: '/api/sites/:siteId/access-keys',
  summary: 'Makes an access key for a machine; the key itself is shown this once',
  action: 'access-key.create',
  params: siteParams,
  body: z.object({ name: nameSchema, expiresAt: instantOrNull.optional() }),
  response: accessKeySchema.extend({ key: z.string() }),
  status: 201,
});

export const revokeAccessKey = contract({
  name: 'revokeAccessKey',
  method: 'delete',
  path: '/api/sites/:siteId/access-keys/:keyId',
  summary: 'Ends an access key at once',
  action: 'access-key.revoke',
  params: siteParams.extend({ keyId: idParam }),
  response: accessKeySchema,
});
