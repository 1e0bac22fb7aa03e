import { queryOptions } from '@tanstack/react-query';
import { findJobs, readJob } from '../../../shared/contracts/jobs.ts';
import { call } from '../../api/call.ts';

export const jobQuery = (siteId: number, jobKey: string) =>
  queryOptions({
    queryKey: ['site', siteId, 'jobs', jobKey],
    queryFn: ({ signal }) => call(readJob, { params: { siteId, jobKey }, signal }),
  });

export const jobKeysQuery = (siteId: number, begins: string) =>
  queryOptions({
    queryKey: ['site', siteId, 'job-keys', begins],
    queryFn: ({ signal }) => call(findJobs, { params: { siteId }, query: { begins }, signal }),
  });
