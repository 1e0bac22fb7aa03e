import { readPlanted } from '../../../shared/contracts/demo.ts';
import { withTenant } from '../../db/tenant.ts';
import { readPlantedOf } from '../../demo/planted.ts';
import type { Api } from '../api.ts';

export function registerDemo({ route, deps }: Api): void {
  route(readPlanted, async ({ organisationId, siteId }) => ({
    planted: await withTenant(deps.db, organisationId, (tx) =>
      readPlantedOf(tx, organisationId, siteId),
    ),
  }));
}
