import { readTrust, type TrustMap } from '../../../shared/contracts/trust.ts';
import { withTenant } from '../../db/tenant.ts';
import { readerOfSite } from '../../flow/figure-zones.ts';
import { readSiteTrust, type SiteTrust } from '../../flow/site-trust.ts';
import type { Api } from '../api.ts';
import { createFigureCache } from '../figure-cache.ts';
import { createKeptByVersion } from '../kept-by-version.ts';

/** The maps of so many sites stay in memory. */
const keptSites = 16;

export function registerTrust({ route, deps }: Api): void {
  const cache = createFigureCache(deps);
  const keep = createKeptByVersion<SiteTrust>(deps, keptSites);

  route(readTrust, (call) =>
    cache.answer(call, async () => {
      const { organisationId, siteId } = call;
      const trust = await keep(call, () =>
        withTenant(deps.db, organisationId, async (tx) =>
          readSiteTrust(await readerOfSite(tx, organisationId, siteId)),
        ),
      );
      return presentTrust(trust, Date.parse(call.query.from), Date.parse(call.query.to));
    }),
  );
}

/** The local days that the period touches. */
function presentTrust(
  { grid, areas, cells, notices }: SiteTrust,
  from: number,
  to: number,
): TrustMap {
  const isIn = grid.days.map(
    (_, day) => (grid.borders[day] ?? to) < to && (grid.borders[day + 1] ?? from) > from,
  );
  const first = isIn.indexOf(true);
  const border = (day: number) => new Date(grid.borders[day] ?? 0).toISOString();
  return {
    from: first < 0 ? null : border(first),
    to: first < 0 ? null : border(isIn.lastIndexOf(true) + 1),
    areas: areas.map(({ id, name }) => ({ id, name })),
    cells: cells
      .filter(({ day }) => isIn[day])
      .map(({ areaId, day, grade, reasons }) => ({
        zoneId: areaId,
        day: grid.days[day] ?? '',
        grade,
        reasons: reasons.map((reason) => ({ grade: reason.grade, text: reason.text })),
      })),
    notices: notices.map(({ kind, zoneIds, text, advice, seconds }) => ({
      kind,
      zoneIds,
      text,
      advice,
      seconds,
    })),
  };
}
