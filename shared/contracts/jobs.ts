import { z } from 'zod';
import { contract, instantOrNull, instantSchema } from './contract.ts';
import { endings } from './plan.ts';
import { siteParams } from './sites.ts';

export const recordVersionSchema = z.object({
  uploadId: z.int(),
  fileName: z.string(),
  line: z.int(),
  /** Where the row told one event, which. */
  event: z.enum(['arrived', 'started', 'finished']).nullable(),
  outcome: z.enum(['new', 'same', 'completing', 'correcting']),
  arrived: instantOrNull,
  started: instantOrNull,
  finished: instantOrNull,
});

export const jobRecordSchema = z.object({
  areaId: z.int(),
  areaName: z.string(),
  pass: z.int(),
  entered: instantOrNull,
  arrived: instantOrNull,
  started: instantOrNull,
  finished: instantOrNull,
  left: instantOrNull,
  finishInferred: z.boolean(),
  /** How the stay ended, where that was no good departure. */
  ending: z.enum(endings).nullable(),
  queueSeconds: z.number().nullable(),
  processSeconds: z.number().nullable(),
  flowSeconds: z.number().nullable(),
  quantity: z.number().nullable(),
  /** What else the row told, by column of the plan. */
  told: z.record(z.string(), z.string()),
  record: z.object({ uploadId: z.int(), line: z.int() }),
  /** All rows that told this record, earliest first; the last of each field holds. */
  versions: z.array(recordVersionSchema),
});
export type JobRecord = z.infer<typeof jobRecordSchema>;

/** A row that told of the job and no longer holds: a later upload is the whole truth for its area and time. */
export const voidedRowSchema = z.object({
  uploadId: z.int(),
  fileName: z.string(),
  line: z.int(),
  areaName: z.string(),
  arrived: instantOrNull,
  started: instantOrNull,
  finished: instantOrNull,
  voidedBy: z.int(),
});
export type VoidedRow = z.infer<typeof voidedRowSchema>;

export const jobStaySchema = z.object({
  zoneId: z.int(),
  zoneName: z.string(),
  kind: z.enum(['area', 'loop', 'site']),
  entered: instantSchema,
  started: instantOrNull,
  left: instantOrNull,
  queueSeconds: z.number().nullable(),
  processSeconds: z.number().nullable(),
  flowSeconds: z.number().nullable(),
});

export const readJob = contract({
  name: 'readJob',
  method: 'get',
  path: '/api/sites/:siteId/jobs/:jobKey',
  summary: 'The whole path of a job: its records with their versions, and its stays in every zone',
  action: 'job.read',
  params: siteParams.extend({ jobKey: z.string().min(1).max(200) }),
  response: z.object({
    jobKey: z.string(),
    records: z.array(jobRecordSchema),
    stays: z.array(jobStaySchema),
    voided: z.array(voidedRowSchema),
  }),
});

export const findJobs = contract({
  name: 'findJobs',
  method: 'get',
  path: '/api/sites/:siteId/jobs',
  summary: 'Job keys that begin with a text',
  action: 'job.read',
  params: siteParams,
  query: z.object({ begins: z.string().trim().min(1).max(200) }),
  response: z.object({ jobKeys: z.array(z.string()) }),
});
