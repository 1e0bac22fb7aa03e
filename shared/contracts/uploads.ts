import { z } from 'zod';
import { contract, idParam, instantOrNull, instantSchema } from './contract.ts';
import { columnPlanSchema, dateOrders, delimiters, encodings, fileKinds } from './plan.ts';
import { siteParams } from './sites.ts';

export const uploadStatuses = [
  'waiting',
  'reading',
  'loading',
  'loaded',
  'failed',
  'withdrawn',
] as const;

const counts = z.record(z.string(), z.int());

/** Every row of the file, counted once: skipped + new + same + completing + correcting + refused = rowsRead. */
export const rowAccountSchema = z.object({
  rowsRead: z.int(),
  skipped: z.int(),
  new: z.int(),
  same: z.int(),
  completing: z.int(),
  correcting: z.int(),
  refused: z.int(),
  skippedBy: counts,
  refusedBy: counts,
  warnings: counts,
  /** Rows of earlier uploads that it voided, being the whole truth for its areas over its span; no rows of its own. */
  voided: z.int().default(0),
});
export type RowAccount = z.infer<typeof rowAccountSchema>;

export const uploadSchema = z.object({
  id: z.int(),
  status: z.enum(uploadStatuses),
  fileName: z.string(),
  /** What the file turned out to be; null until it was looked at. */
  fileKind: z.enum(fileKinds).nullable(),
  receivedAt: instantSchema,
  receivedBy: z.string().nullable(),
  /** True from the request to withdraw until it is done. */
  withdrawing: z.boolean(),
  progress: z.object({ rows: z.int(), bytes: z.int(), bytesTotal: z.int() }),
  plan: columnPlanSchema.nullable(),
  account: rowAccountSchema,
  dataUntil: instantOrNull,
  /** Why it failed, in words, with the code `stopped` where a person stopped it. */
  error: z.string().nullable(),
  errorDetail: z.string().nullable(),
});
export type Upload = z.infer<typeof uploadSchema>;

export const uploadParams = siteParams.extend({ uploadId: idParam });
const uploadStub = z.object({ id: z.int(), status: z.enum(uploadStatuses) });

export const createUpload = contract({
  name: 'createUpload',
  method: 'post',
  path: '/api/sites/:siteId/uploads',
  summary: 'Takes a file in; it is read and loaded in the background',
  action: 'upload.create',
  params: siteParams,
  bodyKind: 'multipart',
  body: z.object({
    file: z.string().describe('the export, as it came'),
    plan: z
      .string()
      .optional()
      .describe('a column plan as JSON, or the id of a saved one; detected when left out'),
  }),
  response: uploadStub,
  status: 202,
});

export const listUploads = contract({
  name: 'listUploads',
  method: 'get',
  path: '/api/sites/:siteId/uploads',
  summary: 'The uploads of a site, newest first',
  action: 'upload.list',
  params: siteParams,
  response: z.array(uploadSchema),
});

export const readUpload = contract({
  name: 'readUpload',
  method: 'get',
  path: '/api/sites/:siteId/uploads/:uploadId',
  summary: 'One upload with its progress and row account',
  action: 'upload.read',
  params: uploadParams,
  response: uploadSchema,
});

export const readRefusedRows = contract({
  name: 'readRefusedRows',
  method: 'get',
  path: '/api/sites/:siteId/uploads/:uploadId/refused.csv',
  summary: 'The refused rows: line number, reason, the row as it came',
  action: 'upload.read',
  params: uploadParams,
  response: z.string(),
  responseKind: 'csv',
});

/** One row of the file with the stays that it told, for the way back from a figure to the file. */
export const readUploadRow = contract({
  name: 'readUploadRow',
  method: 'get',
  path: '/api/sites/:siteId/uploads/:uploadId/rows/:line',
  summary: 'A line of the file as it came, with its header',
  action: 'upload.read',
  params: uploadParams.extend({ line: idParam }),
  response: z.object({
    uploadId: z.int(),
    fileName: z.string(),
    line: z.int(),
    header: z.array(z.string()),
    cells: z.array(z.string()),
  }),
});

export const stopUpload = contract({
  name: 'stopUpload',
  method: 'post',
  path: '/api/sites/:siteId/uploads/:uploadId/stop',
  summary: 'Stops an upload that is not loaded yet; nothing of it is kept',
  action: 'upload.stop',
  params: uploadParams,
  response: uploadStub,
  status: 202,
});

export const readUploadAgain = contract({
  name: 'readUploadAgain',
  method: 'post',
  path: '/api/sites/:siteId/uploads/:uploadId/read-again',
  summary:
    'Reads the original again, by another plan or with the areas that are known by now, in place',
  action: 'upload.read-again',
  params: uploadParams,
  body: z.object({
    plan: z
      .union([columnPlanSchema, z.int().min(1)])
      .optional()
      .describe('a column plan, or the id of a saved one; the same as before when left out'),
  }),
  response: uploadStub,
  status: 202,
});

export const readOriginal = contract({
  name: 'readOriginal',
  method: 'get',
  path: '/api/sites/:siteId/uploads/:uploadId/original',
  summary: 'The file as it came',
  action: 'upload.read',
  params: uploadParams,
  response: z.string(),
  responseKind: 'file',
});

export const withdrawUpload = contract({
  name: 'withdrawUpload',
  method: 'delete',
  path: '/api/sites/:siteId/uploads/:uploadId',
  summary: 'Withdraws an upload: the site becomes as if it had never come',
  action: 'upload.withdraw',
  params: uploadParams,
  response: uploadStub,
  status: 202,
});

const uploadPreviewSchema = z.object({
  fileKind: z.enum(fileKinds),
  /** null where the file is no delimited text. */
  delimiter: z.enum(delimiters).nullable(),
  encoding: z.enum(encodings).nullable(),
  /** Names of the sheets of a workbook. */
  sheets: z.array(z.string()),
  header: z.array(z.string()),
  /** The saved plan that was recognised by the header, where no plan was given. */
  recognised: z.object({ id: z.int(), name: z.string() }).nullable(),
  /** The plan that was given, or the one that was recognised, or the guess; null where no guess could be made. */
  plan: columnPlanSchema.nullable(),
  /** `unknown` where the beginning of the file does not tell day and month apart. */
  dateOrder: z.enum([...dateOrders, 'unknown']).nullable(),
  /** Why each part of the guess was made, or what is missing, in sentences. */
  reasons: z.array(z.object({ about: z.string(), reason: z.string() })),
  /** Words of the event and of the status column among the first rows, commonest first. */
  words: z.object({ event: z.array(z.string()), status: z.array(z.string()) }),
  rows: z.array(
    z.object({
      line: z.int(),
      cells: z.array(z.string()),
      outcome: z.enum(['accepted', 'skipped', 'refused']),
      reason: z.string().nullable(),
      warnings: z.array(z.string()),
      job: z.string().nullable(),
      area: z.string().nullable(),
      arrived: instantOrNull,
      started: instantOrNull,
      finished: instantOrNull,
    }),
  ),
});

/** Reads the beginning of a file without keeping anything: what is detected, and the first rows as read. */
export const previewUpload = contract({
  name: 'previewUpload',
  method: 'post',
  path: '/api/sites/:siteId/upload-preview',
  summary: 'What would be read: the guess at the columns, and the first rows under it',
  action: 'upload.preview',
  params: siteParams,
  bodyKind: 'multipart',
  body: z.object({
    file: z.string().describe('the first 256 KiB of the export, or all of it'),
    plan: z.string().optional().describe('a column plan as JSON to read it by'),
  }),
  response: uploadPreviewSchema,
});
export type UploadPreview = z.infer<typeof uploadPreviewSchema>;

export const previewStoredUpload = contract({
  name: 'previewStoredUpload',
  method: 'post',
  path: '/api/sites/:siteId/uploads/:uploadId/preview',
  summary: 'What would be read of an uploaded file, by another plan or by the one that is detected',
  action: 'upload.preview',
  params: uploadParams,
  body: z.object({ plan: columnPlanSchema.optional() }),
  response: uploadPreviewSchema,
});
