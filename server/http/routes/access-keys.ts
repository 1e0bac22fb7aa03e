import { and, desc, eq, isNull } from 'drizzle-orm';
import {
  createAccessKey,
  listAccessKeys,
  revokeAccessKey,
} from '../../../shared/contracts/access-keys.ts';
import { recordAct } from '../../audit/record-act.ts';
import { newAccessKey } from '../../auth/access-key.ts';
import { accessKey } from '../../db/schema/people.ts';
import { withTenant } from '../../db/tenant.ts';
import { conflict, notFound } from '../../errors.ts';
import type { Api } from '../api.ts';

const present = (row: typeof accessKey.$inferSelect) => ({
  id: row.id,
  name: row.name,
  createdAt: row.createdAt.toISOString(),
  revokedAt: row.revokedAt?.toISOString() ?? null,
});

export function registerAccessKeys({ route, deps }: Api): void {
  const { db, clock } = deps;

  route(listAccessKeys, async ({ organisationId, siteId }) => {
    const rows = await db
      .select()
      .from(accessKey)
      .where(and(eq(accessKey.organisationId, organisationId), eq(accessKey.siteId, siteId)))
      .orderBy(desc(accessKey.id));
    return rows.map(present);
  });

  route(createAccessKey, async ({ organisationId, siteId, body, actor, requestId }) => {
    const { key, keyHash } = newAccessKey();
    return withTenant(db, organisationId, async (tx) => {
      const [row] = await tx
        .insert(accessKey)
        .values({
          organisationId,
          siteId,
          name: body.name,
          keyHash,
          createdBy: actor.kind === 'person' ? actor.personId : null,
          createdAt: clock.now(),
        })
        .returning();
      if (!row) throw new Error('The access key could not be kept.');
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor,
        action: 'access-key.create',
        subjectKind: 'access key',
        subjectId: row.id,
        after: present(row),
        requestId,
      });
      return { ...present(row), key };
    });
  });

  route(revokeAccessKey, async ({ organisationId, siteId, params, actor, requestId }) => {
    const ofKey = and(
      eq(accessKey.organisationId, organisationId),
      eq(accessKey.siteId, siteId),
      eq(accessKey.id, params.keyId),
    );
    return withTenant(db, organisationId, async (tx) => {
      const [before] = await tx.select().from(accessKey).where(ofKey);
      if (!before) throw notFound('The access key');
      const [row] = await tx
        .update(accessKey)
        .set({ revokedAt: clock.now() })
        .where(and(ofKey, isNull(accessKey.revokedAt)))
        .returning();
      if (!row) throw conflict('This access key was revoked already.');
      await recordAct(tx, {
        organisationId,
        siteId,
        at: clock.now(),
        actor,
        action: 'access-key.revoke',
        subjectKind: 'access key',
        subjectId: row.id,
        before: present(before),
        after: present(row),
        requestId,
      });
      return present(row);
    });
  });
}
