import { LRUCache } from 'lru-cache';
import type { Dependencies } from '../dependencies.ts';
import type { Call } from './api.ts';
import { readDataVersion } from './figure-cache.ts';

type Asked = Pick<Call<unknown, unknown, unknown>, 'organisationId' | 'siteId'>;

/**
 * Keeps one value for each of the sites asked for last, made once for each version of their data: whoever
 * asks while it is being made waits for it.
 *
 * @param sites how many sites' values are kept
 */
export function createKeptByVersion<Value>(deps: Dependencies, sites: number) {
  const kept = new LRUCache<number, { version: number; value: Promise<Value> }>({ max: sites });
  return async ({ organisationId, siteId }: Asked, make: () => Promise<Value>): Promise<Value> => {
    const version = await readDataVersion(deps, organisationId, siteId);
    const found = kept.get(siteId);
    if (found?.version === version) return found.value;
    const value = make();
    kept.set(siteId, { version, value });
    value.catch(() => kept.delete(siteId));
    return value;
  };
}
