import type { Request, RequestHandler, Response, Router } from 'express';
import type { z } from 'zod';
import type { Contract } from '../../shared/contracts/contract.ts';
import type { Actor } from '../auth/actor.ts';
import type { Dependencies } from '../dependencies.ts';
import { invalidInput, notFound } from '../errors.ts';
import { authenticate, authorise } from './authenticate.ts';
import { readJsonBody } from './middleware/json-body.ts';
import { refuseForeignOrigin } from './middleware/origin.ts';
import { requestIdOf } from './middleware/request-id.ts';

/** What a handler is given: checked input, and who asks. */
export interface Call<Params, Query, Body> {
  params: Params;
  query: Query;
  body: Body;
  actor: Actor;
  /** The organisation of the site in the path; 0 where the path names none. */
  organisationId: number;
  siteId: number;
  requestId: string;
  req: Request;
  res: Response;
}

export type Handler<C extends Contract> = (
  call: Call<z.output<C['params']>, z.output<C['query']>, z.output<C['body']>>,
) => Promise<z.input<C['response']>>;

/** Registers calls of the API on a router: validate, authenticate, authorise, do, answer. */
export interface Api {
  deps: Dependencies;
  route: <C extends Contract>(contract: C, handler: Handler<C>) => void;
}

export function createApi(router: Router, deps: Dependencies): Api {
  return {
    deps,
    route(contract, handler) {
      const run: RequestHandler = async (req, res) => {
        const params = readParams(contract, req);
        const siteId = params !== null && 'siteId' in params ? Number(params.siteId) : null;
        const who = await authenticate(deps, req, res, siteId);
        if (contract.method !== 'get' && !who.byKey) refuseForeignOrigin(deps.env, req);
        authorise(contract.action, who, siteId);
        if (params === null) throw notFound('What the address names');
        const body = contract.bodyKind === 'json' ? await readJsonBody(req, res) : {};
        const call = {
          params,
          query: parsed(contract.query, req.query, 'query'),
          body: contract.bodyKind === 'json' ? parsed(contract.body, body, 'body') : {},
          actor: who.actor,
          organisationId: who.site?.organisationId ?? 0,
          siteId: siteId ?? 0,
          requestId: requestIdOf(res),
          req,
          res,
        };
        const answer = await handler(call as Parameters<typeof handler>[0]);
        send(contract, res, deps.checkAnswers ? contract.response.parse(answer) : answer);
      };
      router[contract.method](contract.path, run);
    },
  };
}

/** The path's parameters; null where its ids are no ids, so that it names nothing that exists. */
function readParams(contract: Contract, req: Request): Record<string, unknown> | null {
  const result = contract.params.safeParse(req.params);
  return result.success ? (result.data as Record<string, unknown>) : null;
}

function parsed<Schema extends z.ZodType>(
  schema: Schema,
  value: unknown,
  where: 'query' | 'body',
): z.output<Schema> {
  const result = schema.safeParse(value);
  if (result.success) return result.data;
  const errors = result.error.issues.map((issue) => ({
    field: issue.path.join('.') || where,
    message: issue.message,
  }));
  const named = errors.map((error) => error.field).join(', ');
  throw invalidInput(
    `Some of the ${where} could not be used: ${named}. Nothing was changed.`,
    errors,
  );
}

function send(contract: Contract, res: Response, answer: unknown): void {
  if (res.headersSent) return;
  res.status(contract.status);
  if (contract.responseKind === 'empty') res.end();
  else if (contract.responseKind === 'csv') res.type('text/csv').send(answer);
  else res.json(answer);
}
