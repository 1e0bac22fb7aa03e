import { z } from 'zod';
import { contract } from './contract.ts';

export const readHealth = contract({
  name: 'readHealth',
  method: 'get',
  path: '/api/health',
  summary: 'Whether the server and its database answer',
  action: 'health.read',
  response: z.object({ status: z.literal('ok'), database: z.literal('ok') }),
});

export const describeApi = contract({
  name: 'describeApi',
  method: 'get',
  path: '/api/openapi.json',
  summary: 'This description, as OpenAPI 3.1',
  action: 'api.describe',
  response: z.record(z.string(), z.unknown()),
});
