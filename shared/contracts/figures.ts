import { z } from 'zod';
import { contract, instantOrNull, instantSchema } from './contract.ts';
import { siteParams } from './sites.ts';
import { hoursSchema, unitSchema, zoneParams, zoneSchema } from './zones.ts';

export const stepSchema = z.enum(['hour', 'day', 'week']);
export type Step = z.infer<typeof stepSchema>;

const number = z.number().nullable();

/** The figures of one period; null where the data do not speak. In the unit asked for, flow times of jobs. */
const figureFields = {
  wipStart: number,
  wipMean: number,
  wipPeak: number,
  arrivals: number,
  departures: number,
  throughputPerHour: number,
  flowMeanSeconds: number,
  flowP50Seconds: number,
  flowP85Seconds: number,
  flowP95Seconds: number,
  queueMeanSeconds: number,
  processMeanSeconds: number,
  /** Mean number in process, part of wipMean; null where the log holds no starts. */
  inProcessMean: number,
};
export const figuresSchema = z.object(figureFields);
export type Figures = z.infer<typeof figuresSchema>;

const periodFields = {
  from: instantSchema,
  to: instantSchema,
  unit: unitSchema.default('jobs'),
  hours: hoursSchema.default('clock'),
};
const inOrder = (period: { from: string; to: string }) =>
  Date.parse(period.from) < Date.parse(period.to);
const orderMessage = { error: '`from` must lie before `to`.', path: ['from'] };

export const periodQuery = z.object(periodFields).refine(inOrder, orderMessage);
export const seriesQuery = z
  .object({ ...periodFields, step: stepSchema.default('day') })
  .refine(inOrder, orderMessage);

export const seriesPointSchema = z.object({
  start: instantSchema,
  end: instantSchema,
  ...figureFields,
  /** Mean age of the jobs inside just before the step's end. */
  ageMeanSeconds: number,
  /** Of the departures, those that were scrapped and those that were cancelled; the rest are good. */
  scrapped: number,
  cancelled: number,
});
export type SeriesPoint = z.infer<typeof seriesPointSchema>;

export const readSeries = contract({
  name: 'readSeries',
  method: 'get',
  path: '/api/sites/:siteId/zones/:zoneId/series',
  summary:
    'Figures of a zone by local hours, days or ISO weeks; the steps widen the period outwards',
  action: 'figures.read',
  params: zoneParams,
  query: seriesQuery,
  response: z.object({
    zoneId: z.int(),
    step: stepSchema,
    unit: unitSchema,
    hours: hoursSchema,
    partial: z.boolean(),
    approximate: z.boolean(),
    points: z.array(seriesPointSchema),
  }),
});

/** Little's Law on the period: two routes to L, in jobs. See `methods/littles-law`. */
export const littlesLawSchema = z.object({
  wipMean: z.number(),
  arrivalRatePerHour: z.number(),
  departureRatePerHour: z.number(),
  flowMeanSeconds: number,
  product: z.number(),
  residual: z.number(),
  edgeStart: z.number(),
  edgeEnd: z.number(),
  unexplained: z.number(),
});
export type LittlesLaw = z.infer<typeof littlesLawSchema>;

/** wipStart + arrivals − departures = wipEnd, in the unit asked for. */
export const booksSchema = z.object({
  wipStart: z.number(),
  arrivals: z.number(),
  departures: z.number(),
  wipEnd: z.number(),
  balance: z.boolean(),
});

export const summarySchema = z.object({
  zoneId: z.int(),
  from: instantSchema,
  to: instantSchema,
  unit: unitSchema,
  hours: hoursSchema,
  ...figureFields,
  wipEnd: number,
  inProcessEnd: number,
  /** Departures whose finish was inferred from a later start. */
  inferredDepartures: z.int(),
  /** Of the departures, those that were scrapped and those that were cancelled; the rest are good. */
  scrapped: z.number(),
  cancelled: z.number(),
  /** Age of the longest inside just before the period's end, and the mean age. */
  oldestInsideSeconds: number,
  ageMeanSeconds: number,
  /** Share of declared servers occupied; null where none are declared. */
  utilisation: number,
  books: booksSchema,
  partial: z.boolean(),
  approximate: z.boolean(),
  warmingUp: z.boolean(),
  dataUntil: instantOrNull,
  littlesLaw: littlesLawSchema,
  /** Null until findings are built. */
  trend: z
    .object({
      slopePerDay: z.number(),
      slopeLow: z.number(),
      slopeHigh: z.number(),
      pValue: z.number(),
      from: instantSchema,
      to: instantSchema,
    })
    .nullable(),
  controlState: z.string().nullable(),
});
export type Summary = z.infer<typeof summarySchema>;

export const readSummary = contract({
  name: 'readSummary',
  method: 'get',
  path: '/api/sites/:siteId/zones/:zoneId/summary',
  summary: "Figures of a zone over the period, with Little's Law and the books",
  action: 'figures.read',
  params: zoneParams,
  query: periodQuery,
  response: summarySchema,
});

export const insideStaySchema = z.object({
  jobKey: z.string(),
  entered: instantSchema,
  started: instantOrNull,
  left: instantOrNull,
  queueSeconds: number,
  processSeconds: number,
  ageSeconds: z.number(),
  finishInferred: z.boolean(),
  record: z.object({ uploadId: z.int(), line: z.int() }),
});
export type InsideStay = z.infer<typeof insideStaySchema>;

export const readInside = contract({
  name: 'readInside',
  method: 'get',
  path: '/api/sites/:siteId/zones/:zoneId/inside',
  summary: 'Who was inside a zone at a moment, longest first',
  action: 'figures.read',
  params: zoneParams,
  query: z.object({
    at: instantSchema,
    limit: z.coerce.number().int().min(1).max(1000).default(100),
    cursor: z.string().max(600).optional(),
  }),
  response: z.object({
    zoneId: z.int(),
    at: instantSchema,
    total: z.int(),
    stays: z.array(insideStaySchema),
    nextCursor: z.string().nullable(),
  }),
});

export const departedStaySchema = insideStaySchema
  .omit({ ageSeconds: true })
  .extend({ left: instantSchema, flowSeconds: z.number() });
export type DepartedStay = z.infer<typeof departedStaySchema>;

export const readDepartures = contract({
  name: 'readDepartures',
  method: 'get',
  path: '/api/sites/:siteId/zones/:zoneId/departures',
  summary: 'Who left a zone within the period, latest first',
  action: 'figures.read',
  params: zoneParams,
  query: z
    .object({ ...periodFields, limit: z.coerce.number().int().min(1).max(1000).default(100) })
    .refine(inOrder, orderMessage),
  response: z.object({ zoneId: z.int(), stays: z.array(departedStaySchema) }),
});

/** One row of the Floor: a zone with its figures over the period. */
export const floorRowSchema = z.object({
  zone: zoneSchema,
  ...figureFields,
  wipEnd: number,
  inProcessEnd: number,
  oldestInsideSeconds: number,
  books: booksSchema,
  partial: z.boolean(),
  warmingUp: z.boolean(),
});
export type FloorRow = z.infer<typeof floorRowSchema>;

export const readFloor = contract({
  name: 'readFloor',
  method: 'get',
  path: '/api/sites/:siteId/floor',
  summary: 'Every zone of a site over the period, by whole local hours',
  action: 'figures.read',
  params: siteParams,
  query: periodQuery,
  response: z.object({
    from: instantSchema,
    to: instantSchema,
    unit: unitSchema,
    hours: hoursSchema,
    /** Percentiles come from a histogram, within 1 %. */
    approximate: z.boolean(),
    rows: z.array(floorRowSchema),
  }),
});

/** Mean level of every zone by day or week, for the small pictures of the Floor. */
export const floorLevelsSchema = z.object({
  /** n + 1 borders of n steps. */
  borders: z.array(instantSchema),
  zones: z.array(z.object({ zoneId: z.int(), wipMean: z.array(number) })),
});
export type FloorLevels = z.infer<typeof floorLevelsSchema>;

export const readFloorLevels = contract({
  name: 'readFloorLevels',
  method: 'get',
  path: '/api/sites/:siteId/floor/levels',
  summary: 'Mean level of every zone by local day, or by ISO week beyond a hundred days',
  action: 'figures.read',
  params: siteParams,
  query: periodQuery,
  response: floorLevelsSchema,
});

/** What the loaded span of a site looks like, for the time ruler. */
export const siteSpanSchema = z.object({
  /** First moment of the site's data, the latest for which it speaks, and the latest of any area. */
  from: instantOrNull,
  until: instantOrNull,
  latest: instantOrNull,
  /** From here on later exports may still change the figures. */
  settlingFrom: instantOrNull,
  /** Stretches of three days or more in which nothing was recorded anywhere. */
  gaps: z.array(z.object({ from: instantSchema, to: instantSchema })),
});
export type SiteSpan = z.infer<typeof siteSpanSchema>;

export const readSpan = contract({
  name: 'readSpan',
  method: 'get',
  path: '/api/sites/:siteId/span',
  summary: 'The loaded span of a site: where data are missing, and where they still settle',
  action: 'figures.read',
  params: siteParams,
  response: siteSpanSchema,
});
