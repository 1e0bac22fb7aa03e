import {
  createAccessKey,
  listAccessKeys,
  revokeAccessKey,
} from '../../../shared/contracts/access-keys.ts';
import { recordAct } from '../../audit/record-act.ts';
import { newAccessKey } from '../../auth/access-key.ts';
import { keepKey, listKeysOfSite, revokeKey, type AccessKeyRow } from '../../auth/keys-of-site.ts';
import { withTenant } from '../../db/tenant.ts';
import { actOf } from '../act-of.ts';
import type { Api } from '../api.ts';

const present = (row: AccessKeyRow) => ({
  id: row.id,
  name: row.name,
  createdAt: row.createdAt.toISOString(),
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
