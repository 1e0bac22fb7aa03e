import { and, eq } from 'drizzle-orm';
import type { z } from 'zod';
import type { AreaMove, moveArea } from '../../shared/contracts/areas.ts';
import type { Zone } from '../../shared/contracts/zones.ts';
import { site } from '../db/schema/sites.ts';
import { areaMove } from '../db/schema/zones.ts';
import { conflict, invalidInput, notFound } from '../errors.ts';
import { findCircle, type AreaMove as Move } from '../flow/area-moves.ts';
import { readAreaMoves } from '../flow/read-area-moves.ts';
import { presentMoves } from './present-moves.ts';
import { readEveryZone } from './read-zones.ts';
import { ofSite, type SiteWriter } from './site-writer.ts';

export type WantedMove = z.output<typeof moveArea.body>;

/**
 * Lets the rows told of one area count for another, and asks for the site to be derived again. The area
 * keeps its cap, its servers and its place in loops, without effect while all its rows are moved.
 *
 * @throws ApiError invalid-input for what is no area of the site, conflict for a move that another thing
 *   stands against: an earlier move, a loop that would lose the rows, a cap that would hold for none
 */
export async function addAreaMove(
  writer: SiteWriter,
  wanted: WantedMove,
  by: { movedBy: number | null; movedAt: Date },
): Promise<AreaMove> {
  const { tx, organisationId, siteId } = writer;
  await askForRebuild(writer, by.movedAt);
  const zones = await readEveryZone(tx, organisationId, siteId);
  const moves = await readAreaMoves(writer);
  refuseUnknown(zones, wanted);
  refuseContradiction(zones, moves, wanted);
  if (wanted.from === null) refuseLoss(zones, wanted);
  const [made] = await tx
    .insert(areaMove)
    .values({
      organisationId,
      siteId,
      areaId: wanted.areaId,
      targetAreaId: wanted.targetAreaId,
      validFrom: wanted.from === null ? null : new Date(wanted.from),
      ...by,
    })
    .returning({ id: areaMove.id });
  if (!made) throw new Error('The move could not be kept.');
  return findMove(writer, made.id);
}

/**
 * Takes a move back, and asks for the site to be derived again.
 *
 * @returns the move as it was
 * @throws ApiError not-found, or conflict where what is left would lead in a circle
 */
export async function removeAreaMove(
  writer: SiteWriter,
  moveId: number,
  now: Date,
): Promise<AreaMove> {
  await askForRebuild(writer, now);
  const before = await findMove(writer, moveId);
  const left = (await readAreaMoves(writer)).filter((move) => move.id !== moveId);
  const circle = findCircle(left);
  if (circle)
    throw conflict(
      `Without this move the rows of “${before.areaName}” would be led in a circle by the others. Take one of those back first.`,
    );
  await writer.tx.delete(areaMove).where(and(ofSite(writer, areaMove), eq(areaMove.id, moveId)));
  return before;
}

async function findMove(writer: SiteWriter, moveId: number): Promise<AreaMove> {
  const moves = await presentMoves(writer, await readAreaMoves(writer));
  const found = moves.find((move) => move.id === moveId);
  if (!found) throw notFound('The move');
  return found;
}

/**
 * First of all: who changes the moves of a site holds its row until the transaction ends, as a withdrawal
 * does that removes areas, so that they take turns.
 */
async function askForRebuild({ tx, organisationId, siteId }: SiteWriter, now: Date): Promise<void> {
  await tx
    .update(site)
    .set({ rebuildRequestedAt: now })
    .where(and(eq(site.organisationId, organisationId), eq(site.id, siteId)));
}

const nameOf = (zones: readonly Zone[], areaId: number): string =>
  `“${zones.find((zone) => zone.id === areaId)?.name ?? areaId}”`;

function refuseUnknown(zones: readonly Zone[], { areaId, targetAreaId }: WantedMove): void {
  const errors = [];
  const isArea = (id: number) => zones.some((zone) => zone.id === id && zone.kind === 'area');
  if (!isArea(areaId)) errors.push({ field: 'areaId', message: 'This is no area of the site.' });
  if (!isArea(targetAreaId))
    errors.push({ field: 'targetAreaId', message: 'This is no area of the site.' });
  else if (areaId === targetAreaId)
    errors.push({ field: 'targetAreaId', message: 'Choose another area than the one moved.' });
  if (errors.length > 0)
    throw invalidInput(
      'Rows of an area can count for another area of its site. Nothing was changed.',
      errors,
    );
}

function refuseContradiction(
  zones: readonly Zone[],
  moves: readonly Move[],
  { areaId, targetAreaId, from }: WantedMove,
): void {
  const name = (id: number) => nameOf(zones, id);
  const at = from === null ? -Infinity : Date.parse(from);
  const same = moves.find((move) => move.areaId === areaId && move.from === at);
  if (same)
    throw conflict(
      at === -Infinity
        ? `${name(areaId)} is merged into ${name(same.targetAreaId)} already. Take that back first.`
        : `From that moment on ${name(areaId)} counts as ${name(same.targetAreaId)} already. Take that back first.`,
    );
  const merged = moves.find((move) => move.areaId === targetAreaId && move.from === -Infinity);
  if (merged)
    throw conflict(
      `${name(targetAreaId)} is itself merged into ${name(merged.targetAreaId)}. Choose that one, or take the merge back first.`,
    );
  if (findCircle([...moves, { id: 0, areaId, targetAreaId, from: at }]))
    throw conflict(
      `Rows of ${name(targetAreaId)} count as ${name(areaId)} already, so it cannot be the other way round too. Take that back first.`,
    );
}

/** A merge must not let a loop lose rows, nor a cap hold for an area that is no longer shown. */
function refuseLoss(zones: readonly Zone[], { areaId, targetAreaId }: WantedMove): void {
  const [area, target] = [nameOf(zones, areaId), nameOf(zones, targetAreaId)];
  const loop = zones.find(
    (zone) =>
      zone.kind === 'loop' && zone.areaIds.includes(areaId) && !zone.areaIds.includes(targetAreaId),
  );
  if (loop)
    throw conflict(
      `The loop “${loop.name}” names ${area} and not ${target}, so it would lose these rows. Put ${target} into the loop first, or take ${area} out of it.`,
    );
  const cap = zones.find((zone) => zone.id === areaId)?.cap;
  if (cap)
    throw conflict(
      `${area} has a cap of ${cap.limit} ${cap.unit}, which would hold for no area that is shown. Lift it first, or merge ${target} into ${area} instead.`,
    );
}
