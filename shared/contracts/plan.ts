import { z } from 'zod';
import { timeZoneSchema } from './sites.ts';

const header = z.string().min(1).max(500);

/** What a row of a plain file may say beside its job, area and times. */
export const optionalColumns = [
  'record',
  'quantity',
  'family',
  'due',
  'priority',
  'workContent',
  'value',
  'resource',
  'status',
  'parent',
] as const;
export type OptionalColumn = (typeof optionalColumns)[number];

export const timeColumns = ['arrived', 'started', 'finished'] as const;
export type TimeColumn = (typeof timeColumns)[number];

const optionalHeaders = Object.fromEntries(
  optionalColumns.map((column) => [column, header.optional()]),
) as Record<OptionalColumn, z.ZodOptional<typeof header>>;

/** Which header cell holds what, for a row per stay. */
export const stayColumnsSchema = z
  .object({
    job: header,
    area: header,
    arrived: header.optional(),
    started: header.optional(),
    finished: header.optional(),
    ...optionalHeaders,
  })
  .strict()
  .refine(
    (columns) => timeColumns.some((column) => columns[column] !== undefined),
    'Name at least one of the columns arrived, started and finished.',
  );
export type StayColumns = z.infer<typeof stayColumnsSchema>;

export const delimiters = [',', ';', '\t', '|'] as const;

export const dateOrders = ['day-first', 'month-first'] as const;
export type DateOrder = (typeof dateOrders)[number];

/** How a file is read. Keys that are left out are detected. Rows per event and per job follow later. */
export const columnPlanSchema = z
  .object({
    shape: z.literal('stay'),
    columns: stayColumnsSchema,
    timeZone: timeZoneSchema,
    /** `auto`, or a date-fns pattern. */
    timeFormat: z.string().min(1).max(80).default('auto'),
    unknownAreas: z.enum(['add', 'refuse']).default('add'),
    mode: z.enum(['merge', 'replace-period']).default('merge'),
    delimiter: z.enum(delimiters).optional(),
    /** Which of two short numbers of a date is the day, where the time format is `auto`. */
    dateOrder: z.enum(dateOrders).optional(),
  })
  .strict();
export type ColumnPlan = z.infer<typeof columnPlanSchema>;
