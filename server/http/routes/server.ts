import { sql } from 'drizzle-orm';
import { describeApi, readHealth } from '../../../shared/contracts/server.ts';
import type { Api } from '../api.ts';
import { openApiDocument } from '../openapi.ts';

export function registerServer({ route, deps }: Api): void {
  route(readHealth, async () => {
    await deps.db.execute(sql`/* health */ select 1`);
    return { status: 'ok', database: 'ok' } as const;
  });
  route(describeApi, () => Promise.resolve(openApiDocument()));
}
