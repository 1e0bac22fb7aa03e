import {
  createAccessKey,
  listAccessKeys,
  revokeAccessKey,
} from '../../../shared/contracts/access-keys.ts';
import { recordAct } from '../../audit/record-act.ts';
import { newAccessKey } from '../../auth/access-key.ts';
import { keepKey, listKeysOfSite, revokeKey, type AccessKeyRow } from '../../auth/keys-of-site.ts';
import { withTenant } from '../../db/tenant.ts';
import { invalidInput } from '../../errors.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

const present = (row: AccessKeyRow) => ({
  id: row.id,
  name: row.name,
  createdAt: row.createdAt.toISOString(),
  expiresAt: row.expiresAt?.toISOString() ?? null,
  lastUsedAt: row.lastUsedAt?.toISOString() ?? null,
  revokedAt: row.revokedAt?.toISOString() ?? null,
});

export function registerAccessKeys({ route, deps }: Api): void {
  const { db, clock } = deps;

  route(listAccessKeys, async (call) => (await listKeysOfSite(db, call)).map(present));

  route(createAccessKey, (call) => {
    const { organisationId, siteId, actor, body } = call;
    const { key, keyHash } = newAccessKey();
    return withTenant(db, organisationId, async (tx) => {
      const row = await keepKey(tx, {
        organisationId,
        siteId,
        name: body.name,
        keyHash,
        createdBy: actor.kind === 'person' ? actor.personId : null,
        createdAt: clock.now(),
        expiresAt: expiryOf(body.expiresAt, clock.now()),
      });
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'access-key.create',
        subjectKind: 'access key',
        subjectId: row.id,
        after: present(row),
      });
      return { ...present(row), key };
    });
  });

  route(revokeAccessKey, (call) =>
    withTenant(db, call.organisationId, async (tx) => {
      const { before, after } = await revokeKey(tx, call, call.params.keyId, clock.now());
      await recordAct(tx, {
        ...actOf(call, clock),
        action: 'access-key.revoke',
        subjectKind: 'access key',
        subjectId: after.id,
        before: present(before),
        after: present(after),
      });
      return present(after);
    }),
  );
}

/** @throws ApiError where the key would have expired already */
function expiryOf(told: string | null | undefined, now: Date): Date | null {
  if (!told) return null;
  const at = new Date(told);
  if (at > now) return at;
  throw invalidInput('The access key would have expired already. No key was made.', [
    { field: 'expiresAt', message: 'Give a time to come, or none.' },
  ]);
}
