import { z } from 'zod';
import type { Action } from '../permissions.ts';

export type Method = 'get' | 'post' | 'patch' | 'delete';

/**
 * One call of the API, stated once: the server validates and answers by it, the client calls by it, the
 * published description is made from it, and the tests walk over all of them.
 */
export interface Contract<
  Params extends z.ZodType = z.ZodType,
  Query extends z.ZodType = z.ZodType,
  Body extends z.ZodType = z.ZodType,
  Response extends z.ZodType = z.ZodType,
> {
  /** Unique; also the operation's id in the published description. */
  name: string;
  method: Method;
  /** Path below the origin, with `:name` for each parameter. */
  path: string;
  summary: string;
  action: Action;
  params: Params;
  query: Query;
  body: Body;
  /** `json` unless said otherwise; a multipart body is read by the route itself. */
  bodyKind: 'none' | 'json' | 'multipart';
  response: Response;
  responseKind: 'json' | 'csv' | 'file' | 'empty';
  status: 200 | 201 | 202 | 204;
}

const nothing = z.object({});
type Nothing = typeof nothing;

/** Fills in what a contract does not say: no parameters, no query, no body, JSON, status 200. */
export function contract<
  Response extends z.ZodType,
  Params extends z.ZodType = Nothing,
  Query extends z.ZodType = Nothing,
  Body extends z.ZodType = Nothing,
>(
  given: Pick<Contract, 'name' | 'method' | 'path' | 'summary' | 'action'> & {
    params?: Params;
    query?: Query;
    body?: Body;
    bodyKind?: Contract['bodyKind'];
    response: Response;
    responseKind?: Contract['responseKind'];
    status?: Contract['status'];
  },
): Contract<Params, Query, Body, Response> {
  return {
    params: nothing as unknown as Params,
    query: nothing as unknown as Query,
    body: nothing as unknown as Body,
    bodyKind: given.body ? 'json' : 'none',
    responseKind: 'json',
    status: 200,
    ...given,
  };
}

/** An id in a path: a whole number from 1. */
export const idParam = z.coerce.number().int().min(1).max(2_147_483_647);
/** A name that a person gives: one line of text. */
export const nameSchema = z
  .string()
  .trim()
  .min(1, 'Give a name.')
  .max(120, 'Use at most 120 characters.')
  .regex(/^\P{Cc}*$/u, 'Leave out line breaks and control characters.');
const firstInstant = Date.parse('0001-01-01T00:00:00Z');
const lastInstant = Date.parse('9999-12-31T23:59:59.999Z');

/** A moment: ISO 8601 with an offset, in years that are written with four digits. */
export const instantSchema = z.iso
  .datetime({ offset: true, error: 'Use a time like 2026-10-24T06:00:00+01:00.' })
  .refine((value) => {
    const at = Date.parse(value);
    // What is no time at all was complained of already.
    return Number.isNaN(at) || (at >= firstInstant && at <= lastInstant);
  }, 'Use a time from the year 1 to the year 9999.');
/** A moment as it is answered, or null where it is not known. */
export const instantOrNull = instantSchema.nullable();
