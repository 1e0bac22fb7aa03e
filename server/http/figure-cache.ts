import { createHash } from 'node:crypto';
import { LRUCache } from 'lru-cache';
import { sql } from 'drizzle-orm';
import { z } from 'zod';
import { withTenant } from '../db/tenant.ts';
import type { Dependencies } from '../dependencies.ts';
import type { Call } from './api.ts';

/** Kept answers take at most so much memory, counted by the length of their text. */
const keptBytes = 32 * 1024 * 1024;
const versionRow = z.object({ data_version: z.coerce.number() });

type Asked = Pick<Call<unknown, unknown, unknown>, 'req' | 'res' | 'organisationId' | 'siteId'>;

/** Answers about figures, kept under the version of the site's data: a new version makes them unreachable. */
export interface FigureCache {
  /** Sends the kept answer, or makes, keeps and sends it; a browser that has it already is told so. */
  answer<Answer>(call: Asked, make: () => Promise<Answer>): Promise<Answer>;
}

export function createFigureCache(deps: Dependencies): FigureCache {
  const kept = new LRUCache<string, { text: string; tag: string }>({
    maxSize: keptBytes,
    sizeCalculation: (entry) => entry.text.length + 200,
  });
  return {
    async answer(call, make) {
      const version = await readDataVersion(deps, call.organisationId, call.siteId);
      const key = `${call.siteId} ${version} ${call.req.originalUrl}`;
      const found = kept.get(key);
      if (found && !deps.checkAnswers) {
        sendKept(call, found);
        // The answer is sent; what is returned is not looked at.
        return undefined as never;
      }
      const answer = await make();
      const text = JSON.stringify(answer);
      const entry = { text, tag: `"${createHash('sha1').update(text).digest('base64url')}"` };
      kept.set(key, entry);
      if (!deps.checkAnswers) sendKept(call, entry);
      return answer;
    },
  };
}

/** Private: an answer belongs to whoever asked; it is asked for again each time, and often unchanged. */
function sendKept({ req, res }: Asked, entry: { text: string; tag: string }): void {
  res.setHeader('ETag', entry.tag);
  res.setHeader('Cache-Control', 'private, no-cache');
  if (req.fresh) res.status(304).end();
  else res.type('application/json').send(entry.text);
}

/** The version of a site's data: it grows with every change of figures. */
export async function readDataVersion(
  deps: Dependencies,
  organisationId: number,
  siteId: number,
): Promise<number> {
  const { rows } = await withTenant(deps.db, organisationId, (tx) =>
    tx.execute(sql`/* data version */
      select data_version from site where organisation_id = ${organisationId} and id = ${siteId}`),
  );
  return versionRow.parse(rows[0]).data_version;
}
