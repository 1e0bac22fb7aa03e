import { sql } from 'drizzle-orm';
import { z } from 'zod';
import type { Area, LikelyPair } from '../../shared/contracts/areas.ts';
import { areNamesAlike } from '../methods/name-likeness.ts';
import type { SiteWriter } from './site-writer.ts';

/** So many pairs are looked into; where more names are alike, they say little. */
const mostPairs = 20;

type NamedArea = Pick<Area, 'id' | 'name' | 'rows'>;

/**
 * Areas that may be one, written in two ways: their names are alike, no upload tells of both over the same
 * time, and no job was in both at once.
 */
export async function readLikelyPairs(
  site: SiteWriter,
  areas: readonly NamedArea[],
): Promise<LikelyPair[]> {
  const pairs = alikeByName(areas.filter((area) => area.rows > 0));
  if (pairs.length === 0) return [];
  const apart = await readPairsApart(site, pairs);
  return pairs.filter((_, index) => apart.has(index));
}

function alikeByName(areas: readonly NamedArea[]): LikelyPair[] {
  const pairs: LikelyPair[] = [];
  for (const [index, one] of areas.entries())
    for (const other of areas.slice(index + 1)) {
      if (!areNamesAlike(one.name, other.name)) continue;
      const [fewer, more] = one.rows < other.rows ? [one, other] : [other, one];
      pairs.push({ areaId: fewer.id, targetAreaId: more.id });
      if (pairs.length === mostPairs) return pairs;
    }
  return pairs;
}

/** Which of the pairs, by their place, are never told of over the same time nor visited at once by a job. */
async function readPairsApart(
  { tx, organisationId, siteId }: SiteWriter,
  pairs: readonly LikelyPair[],
): Promise<Set<number>> {
  const ofSite = (table: string) => sql`
    ${sql.identifier(table)}.organisation_id = ${organisationId}
    and ${sql.identifier(table)}.site_id = ${siteId}`;
  const { rows } = await tx.execute(sql`/* pairs of areas apart */
    select place from unnest(
      ${sql.param(pairs.map((pair) => pair.areaId))}::integer[],
      ${sql.param(pairs.map((pair) => pair.targetAreaId))}::integer[]
    ) with ordinality as pair (one_id, other_id, place)
    where not exists (
      select from upload_area as one join upload_area as other
        on ${ofSite('other')} and other.upload_id = one.upload_id
      where ${ofSite('one')} and one.area_id = one_id and other.area_id = other_id
        and one.first_at <= other.latest_at and other.first_at <= one.latest_at
    )
    and not exists (
      select from record as one join record as other
        on ${ofSite('other')} and other.job_key = one.job_key
      where ${ofSite('one')} and one.area_id = one_id and other.area_id = other_id
        and one.stay_from < coalesce(other.left_at, 'infinity')
        and other.stay_from < coalesce(one.left_at, 'infinity')
    )
    order by place`);
  const places = z.array(z.object({ place: z.coerce.number() })).parse(rows);
  return new Set(places.map(({ place }) => place - 1));
}
