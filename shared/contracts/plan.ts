import { z } from 'zod';
import { timeZoneSchema } from './sites.ts';

const header = z.string().min(1).max(500);

/** What a row may say beside its job, area and times. */
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

/** How a stay can end otherwise than as a good departure. */
export const endings = ['scrapped', 'cancelled'] as const;
export type Ending = (typeof endings)[number];

const optionalHeaders = Object.fromEntries(
  optionalColumns.map((column) => [column, header.optional()]),
) as Record<OptionalColumn, z.ZodOptional<typeof header>>;

const timeHeaders = {
  arrived: header.optional(),
  started: header.optional(),
  finished: header.optional(),
};

const namesATime = (columns: Partial<Record<TimeColumn, string>>): boolean =>
  timeColumns.some((column) => columns[column] !== undefined);
const nameATime = 'Name at least one of the columns arrived, started and finished.';

/** Which header cell holds what, for a row per stay. */
export const stayColumnsSchema = z
  .object({ job: header, area: header, ...timeHeaders, ...optionalHeaders })
  .strict()
  .refine(namesATime, nameATime);
export type StayColumns = z.infer<typeof stayColumnsSchema>;

/** For a row per event: which of the times it is, and the time itself. */
export const eventColumnsSchema = z
  .object({ job: header, area: header, event: header, time: header, ...optionalHeaders })
  .strict();
export type EventColumns = z.infer<typeof eventColumnsSchema>;

/** For a row per job: the job, and columns of times for each area. */
export const jobColumnsSchema = z.object({ job: header, ...optionalHeaders }).strict();
export type JobColumns = z.infer<typeof jobColumnsSchema>;

/** The columns of one area in a row per job; any time may be missing, not all. */
export const areaColumnsSchema = z
  .object({ area: z.string().trim().min(1).max(200), ...timeHeaders })
  .strict()
  .refine(namesATime, nameATime);
export type AreaColumns = z.infer<typeof areaColumnsSchema>;

const words = z.array(z.string().trim().min(1).max(200)).max(200);

/** Which words of the event column mean what; compared without blanks at their ends and without case. */
export const eventWordsSchema = z
  .object({
    arrived: words.optional(),
    started: words.optional(),
    finished: words.optional(),
    scrapped: words.optional(),
    cancelled: words.optional(),
    /** Words that tell nothing of a stay, as of a pause; their rows are skipped. */
    ignored: words.optional(),
  })
  .strict()
  .refine(
    ({ ignored: _, ...told }) => Object.values(told).some((list) => list.length > 0),
    'Name at least one word of the event column that tells of a stay.',
  );
export type EventWords = z.infer<typeof eventWordsSchema>;
export type EventKind = keyof EventWords;
export const eventKinds = [
  ...timeColumns,
  ...endings,
  'ignored',
] as const satisfies readonly EventKind[];

/** Which words of the status column end a stay otherwise than as a good departure. */
export const statusWordsSchema = z
  .object({ scrapped: words.optional(), cancelled: words.optional() })
  .strict();

/** Delimited text, a workbook (XLSX, ECMA-376), or an event log (XES, IEEE 1849). */
export const fileKinds = ['text', 'workbook', 'xes'] as const;
export type FileKind = (typeof fileKinds)[number];

export const delimiters = [',', ';', '\t', '|'] as const;
export type Delimiter = (typeof delimiters)[number];

export const encodings = ['utf-8', 'utf-16le', 'utf-16be', 'windows-1252'] as const;
export type Encoding = (typeof encodings)[number];

export const dateOrders = ['day-first', 'month-first'] as const;
export type DateOrder = (typeof dateOrders)[number];

/** Settings that every shape has. Keys that are left out are detected. */
const settings = {
  timeZone: timeZoneSchema,
  /** `auto`, or a date-fns pattern. */
  timeFormat: z.string().min(1).max(80).default('auto'),
  unknownAreas: z.enum(['add', 'refuse']).default('add'),
  mode: z.enum(['merge', 'replace-period']).default('merge'),
  delimiter: z.enum(delimiters).optional(),
  encoding: z.enum(encodings).optional(),
  /** The line (of a workbook the row) on which the header stands, from 1; 0 where there is none. */
  headerLine: z.int().min(0).max(1_000_000).optional(),
  /** The sheet of a workbook, by its name. */
  sheet: z.string().min(1).max(200).optional(),
  /** Which of two short numbers of a date is the day, where the time format is `auto`. */
  dateOrder: z.enum(dateOrders).optional(),
  /** What divides whole numbers from their fractions. */
  decimalSign: z.enum(['.', ',']).optional(),
  statusWords: statusWordsSchema.optional(),
};

const stayPlanSchema = z
  .object({ shape: z.literal('stay'), columns: stayColumnsSchema, ...settings })
  .strict();
const eventPlanSchema = z
  .object({
    shape: z.literal('event'),
    columns: eventColumnsSchema,
    /** Guessed from the words that the file uses where it is left out. */
    eventWords: eventWordsSchema.optional(),
    ...settings,
  })
  .strict();
const jobPlanSchema = z
  .object({
    shape: z.literal('job'),
    columns: jobColumnsSchema,
    areas: z.array(areaColumnsSchema).min(1).max(300),
    ...settings,
  })
  .strict();

/** How a file is read. */
export const columnPlanSchema = z.discriminatedUnion('shape', [
  stayPlanSchema,
  eventPlanSchema,
  jobPlanSchema,
]);
export type ColumnPlan = z.infer<typeof columnPlanSchema>;
export type StayPlan = z.infer<typeof stayPlanSchema>;
export type EventPlan = z.infer<typeof eventPlanSchema>;
export type JobPlan = z.infer<typeof jobPlanSchema>;
export type Shape = ColumnPlan['shape'];
export const shapes = ['stay', 'event', 'job'] as const satisfies readonly Shape[];
