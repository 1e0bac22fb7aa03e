import { createDocument, type ZodOpenApiPathsObject } from 'zod-openapi';
import type { z } from 'zod';
import { contracts } from '../../shared/contracts/all.ts';
import type { Contract } from '../../shared/contracts/contract.ts';
import { errorKinds, problemSchema } from '../../shared/errors.ts';
import { policy, type Rule } from '../../shared/permissions.ts';

let document: Record<string, unknown> | undefined;

/** The API as OpenAPI 3.1, made from the contracts. */
export function openApiDocument(): Record<string, unknown> {
  document ??= createDocument({
    openapi: '3.1.0',
    info: {
      title: 'Weirmark',
      version: '1',
      description:
        'Times are ISO 8601 with offset, durations seconds, rates per hour. Errors are problem documents (RFC 9457).',
    },
    paths: paths(),
    components: {
      securitySchemes: {
        session: { type: 'apiKey', in: 'cookie', name: 'weirmark_session' },
        accessKey: { type: 'http', scheme: 'bearer' },
      },
    },
  }) as unknown as Record<string, unknown>;
  return document;
}

function paths(): ZodOpenApiPathsObject {
  const found: ZodOpenApiPathsObject = {};
  for (const contract of contracts) {
    const path = contract.path.replace(/:(\w+)/g, '{$1}');
    found[path] = { ...found[path], [contract.method]: operation(contract) };
  }
  return found;
}

function operation(contract: Contract) {
  const rule: Rule = policy[contract.action];
  return {
    operationId: contract.name,
    summary: contract.summary,
    security:
      rule.open === 'anyone' ? [] : [{ session: [] }, ...(rule.key ? [{ accessKey: [] }] : [])],
    requestParams: {
      path: contract.params as z.ZodObject,
      query: contract.query as z.ZodObject,
    },
    ...(contract.bodyKind === 'none'
      ? {}
      : {
          requestBody: {
            required: true,
            content: {
              [contract.bodyKind === 'json' ? 'application/json' : 'multipart/form-data']: {
                schema: contract.body,
              },
            },
          },
        }),
    responses: {
      [contract.status]: answer(contract),
      default: {
        description: `A problem: ${Object.keys(errorKinds).join(', ')}`,
        content: { 'application/problem+json': { schema: problemSchema } },
      },
    },
  };
}

function answer(contract: Contract) {
  if (contract.responseKind === 'empty') return { description: 'done' };
  const type = mediaTypes[contract.responseKind];
  return { description: contract.summary, content: { [type]: { schema: contract.response } } };
}

const mediaTypes = {
  json: 'application/json',
  csv: 'text/csv',
  file: 'application/octet-stream',
} as const;
