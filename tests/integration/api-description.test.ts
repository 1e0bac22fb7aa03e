import { Validator } from '@seriousme/openapi-schema-validator';
import request from 'supertest';
import { afterAll, beforeAll, expect, it } from 'vitest';
import { contracts } from '../../shared/contracts/all.ts';
import { startTestApp, type TestApp } from '../support/app.ts';

let test: TestApp;
beforeAll(async () => {
  test = await startTestApp({ demo: false });
});
afterAll(() => test.close());

it('the published description is valid OpenAPI 3.1 and has every call', async () => {
  const response = await request(test.app).get('/api/openapi.json').expect(200);
  const description = response.body as {
    openapi: string;
    paths: Record<string, Record<string, unknown>>;
  };
  const validator = new Validator();
  const result = await validator.validate(structuredClone(description));
  expect(result.errors ?? []).toEqual([]);
  expect(result.valid).toBe(true);
  expect(validator.version).toBe('3.1');
  for (const { path, method } of contracts)
    expect(description.paths[path.replace(/:(\w+)/g, '{$1}')]).toHaveProperty(method);
});

it('health answers', async () => {
  const response = await request(test.app).get('/api/health').expect(200);
  expect(response.body).toEqual({ status: 'ok', database: 'ok' });
});
