import type { z } from 'zod';
import type { Contract } from '../../shared/contracts/contract.ts';
import { ApiError, problemOfText, unreachable } from './api-error.ts';
import { announceSignedOut } from './signed-out.ts';

export interface CallInput<C extends Contract> {
  params?: z.input<C['params']>;
  query?: z.input<C['query']>;
  body?: z.input<C['body']>;
  form?: FormData;
  signal?: AbortSignal;
}

/**
 * Makes one call of the API by its contract and parses the answer by it.
 *
 * @throws ApiError with the problem that the server told, or that it could not be reached
 */
export async function call<C extends Contract>(
  contract: C,
  input: CallInput<C> = {},
): Promise<z.output<C['response']>> {
  const response = await send(contract, input);
  const text = await response.text();
  if (!response.ok) {
    if (response.status === 401 && contract.name !== 'signIn') announceSignedOut();
    throw new ApiError(problemOfText(response.status, text));
  }
  if (contract.responseKind === 'empty') return undefined as z.output<C['response']>;
  const answer: unknown = contract.responseKind !== 'json' ? text : JSON.parse(text);
  return contract.response.parse(answer) as z.output<C['response']>;
}

async function send(contract: Contract, input: CallInput<Contract>): Promise<Response> {
  const body = input.form ?? (input.body === undefined ? null : JSON.stringify(input.body));
  try {
    return await fetch(addressOf(contract, input), {
      method: contract.method.toUpperCase(),
      credentials: 'same-origin',
      ...(input.body === undefined ? {} : { headers: { 'Content-Type': 'application/json' } }),
      ...(body === null ? {} : { body }),
      ...(input.signal ? { signal: input.signal } : {}),
    });
  } catch (error) {
    if (error instanceof DOMException && error.name === 'AbortError') throw error;
    throw new ApiError(unreachable);
  }
}

/** The address of a call: parameters in the path, what is asked in the query. */
export function addressOf(
  contract: Pick<Contract, 'path'>,
  input: { params?: unknown; query?: unknown },
): string {
  const params = (input.params ?? {}) as Record<string, string | number>;
  const path = contract.path.replace(/:(\w+)/g, (_, name: string) =>
    encodeURIComponent(String(params[name])),
  );
  const query = new URLSearchParams();
  for (const [name, value] of Object.entries((input.query ?? {}) as Record<string, unknown>))
    if (typeof value === 'string' || typeof value === 'number') query.set(name, String(value));
  const asked = query.toString();
  return asked ? `${path}?${asked}` : path;
}
