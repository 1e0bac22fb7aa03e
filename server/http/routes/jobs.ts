import { findJobs, readJob } from '../../../shared/contracts/jobs.ts';
import { withTenant } from '../../db/tenant.ts';
import { notFound } from '../../errors.ts';
import { readerOfSite } from '../../flow/figure-zones.ts';
import {
  readJobKeys,
  readJobRecords,
  readJobStays,
  readToldRows,
  readVoidedRows,
} from '../../flow/job-path.ts';
import type { Api } from '../api.ts';
import { presentJob } from '../present-job.ts';

const mostKeys = 20;

export function registerJobs({ route, deps }: Api): void {
  route(readJob, ({ organisationId, siteId, params }) =>
    withTenant(deps.db, organisationId, async (tx) => {
      const reader = await readerOfSite(tx, organisationId, siteId);
      const records = await readJobRecords(reader, params.jobKey);
      const voided = await readVoidedRows(reader, params.jobKey);
      if (records.length === 0 && voided.length === 0) throw notFound('The job');
      const told = await readToldRows(reader, params.jobKey);
      const stays = await readJobStays(reader, params.jobKey);
      return presentJob(params.jobKey, records, told, stays, voided);
    }),
  );

  route(findJobs, ({ organisationId, siteId, query }) =>
    withTenant(deps.db, organisationId, async (tx) => {
      const reader = await readerOfSite(tx, organisationId, siteId);
      return { jobKeys: await readJobKeys(reader, query.begins, mostKeys) };
    }),
  );
}
