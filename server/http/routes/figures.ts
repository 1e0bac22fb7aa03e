import {
  readDepartures,
  readFloor,
  readFloorLevels,
  readInside,
  readSeries,
  readSpan,
  readSummary,
} from '../../../shared/contracts/figures.ts';
import { withTenant } from '../../db/tenant.ts';
import { ApiError, invalidInput, notFound } from '../../errors.ts';
import { readDeparturesWithin } from '../../flow/departures-within.ts';
import { readerOfSite, readFigureZones } from '../../flow/figure-zones.ts';
import { readFloorLevels as readLevelsOfFloor } from '../../flow/floor-levels.ts';
import { readInsideAt } from '../../flow/inside-at.ts';
import { readLevelAt } from '../../flow/level-over.ts';
import { readSiteFloor } from '../../flow/site-floor.ts';
import { readSiteSpan } from '../../flow/site-span.ts';
import { readServerSeconds } from '../../flow/utilisation.ts';
import type { FigureZone, Period, SiteReader } from '../../flow/zone-reader.ts';
import { readZoneSeries } from '../../flow/zone-series.ts';
import { readZoneSummary } from '../../flow/zone-summary.ts';
import { dayMs, stepBorders } from '../../../shared/local-time.ts';
import { findSite } from '../../sites/present-site.ts';
import { readZones } from '../../sites/read-zones.ts';
import type { Api, Call } from '../api.ts';
import { createFigureCache } from '../figure-cache.ts';
import {
  presentDeparture,
  presentFloorRow,
  presentInside,
  presentSummary,
} from '../present-figures.ts';
import { placeOfCursor, cursorOfPlace } from '../inside-cursor.ts';

/** At most so many points a call; a longer period asks for a longer step. */
const mostPoints = 12_000;

export function registerFigures({ route, deps }: Api): void {
  const { db } = deps;
  const cache = createFigureCache(deps);
  type Asked = Pick<Call<unknown, unknown, unknown>, 'organisationId' | 'siteId'>;

  const inZone = <Result>(
    { organisationId, siteId }: Asked,
    zoneId: number,
    work: (reader: SiteReader, zone: FigureZone) => Promise<Result>,
  ) =>
    withTenant(db, organisationId, async (tx) => {
      const reader = await readerOfSite(tx, organisationId, siteId);
      const [zone] = await readFigureZones(reader, zoneId);
      if (!zone) throw notFound('The zone');
      return work(reader, zone);
    });

  route(readSeries, (call) =>
    cache.answer(call, () =>
      inZone(call, call.params.zoneId, async (reader, zone) => {
        const { step, unit, hours } = call.query;
        refuseWorkingHours(hours);
        const period = periodOf(call.query);
        refuseTooManyPoints(reader, step, period);
        const series = await readZoneSeries(reader, zone, step, period, unit);
        return { zoneId: zone.id, step, unit, hours, ...series };
      }),
    ),
  );

  route(readSummary, (call) =>
    cache.answer(call, () =>
      inZone(call, call.params.zoneId, async (reader, zone) => {
        refuseWorkingHours(call.query.hours);
        const period = periodOf(call.query);
        const summary = await readZoneSummary(reader, zone, period, call.query.unit);
        if (isUnexplained(summary.littlesLaw))
          deps.log.error(
            { siteId: call.siteId, zoneId: zone.id, littlesLaw: summary.littlesLaw },
            'levels and stays disagree: rebuild the site',
          );
        const serverSeconds = await readServerSeconds(reader, zone.id, period);
        return presentSummary(call.query, zone, period, summary, serverSeconds);
      }),
    ),
  );

  route(readInside, (call) =>
    inZone(call, call.params.zoneId, async (reader, zone) => {
      const { limit, cursor } = call.query;
      const at = Date.parse(call.query.at);
      const rows = await readInsideAt(reader, zone.id, at, limit, placeOfCursor(cursor));
      const last = rows.length === limit ? rows.at(-1) : undefined;
      return {
        zoneId: zone.id,
        at: new Date(at).toISOString(),
        total: await readLevelAt(reader, zone.id, 'inside_jobs', at),
        stays: rows.map(presentInside),
        nextCursor: last ? cursorOfPlace(last) : null,
      };
    }),
  );

  route(readFloorLevels, (call) =>
    cache.answer(call, () =>
      withTenant(db, call.organisationId, async (tx) => {
        const { unit, hours } = call.query;
        refuseWorkingHours(hours);
        const period = periodOf(call.query);
        refuseTooLong(period);
        const reader = await readerOfSite(tx, call.organisationId, call.siteId);
        const zones = await readFigureZones(reader);
        const levels = await readLevelsOfFloor(reader, zones, period, unit);
        return { borders: levels.borders.map(iso), zones: levels.zones };
      }),
    ),
  );

  route(readSpan, (call) =>
    cache.answer(call, () =>
      withTenant(db, call.organisationId, async (tx) => {
        const reader = await readerOfSite(tx, call.organisationId, call.siteId);
        const site = await findSite(tx, call.organisationId, call.siteId);
        const span = await readSiteSpan(reader);
        return {
          from: site.dataFrom,
          until: site.dataUntil,
          latest: isoOrNull(span.latest),
          settlingFrom: isoOrNull(span.settlingFrom),
          gaps: span.gaps.map((gap) => ({ from: iso(gap.from), to: iso(gap.to) })),
        };
      }),
    ),
  );

  route(readDepartures, (call) =>
    inZone(call, call.params.zoneId, async (reader, zone) => {
      refuseWorkingHours(call.query.hours);
      const period = periodOf(call.query);
      const rows = await readDeparturesWithin(reader, zone.id, period, call.query.limit);
      return { zoneId: zone.id, stays: rows.map(presentDeparture) };
    }),
  );

  route(readFloor, (call) =>
    cache.answer(call, () =>
      withTenant(db, call.organisationId, async (tx) => {
        const { unit, hours } = call.query;
        refuseWorkingHours(hours);
        const reader = await readerOfSite(tx, call.organisationId, call.siteId);
        const zones = await readZones(tx, call.organisationId, call.siteId);
        const figureZones = await readFigureZones(reader);
        const floor = await readSiteFloor(reader, figureZones, periodOf(call.query), unit);
        const byId = new Map(floor.rows.map((row) => [row.zone.id, row]));
        return {
          from: new Date(floor.period.from).toISOString(),
          to: new Date(floor.period.to).toISOString(),
          unit,
          hours,
          approximate: floor.approximate,
          rows: zones.flatMap((zone) => {
            const row = byId.get(zone.id);
            return row ? [presentFloorRow(zone, floor.period, row)] : [];
          }),
        };
      }),
    ),
  );
}

const iso = (at: number) => new Date(at).toISOString();
const isoOrNull = (at: number | null) => (at === null ? null : iso(at));

const periodOf = (query: { from: string; to: string }): Period => ({
  from: Date.parse(query.from),
  to: Date.parse(query.to),
});

function refuseWorkingHours(hours: 'clock' | 'working'): void {
  if (hours === 'working')
    throw new ApiError(
      'not-built',
      'Figures in working hours are not available yet. Ask for hours=clock.',
      { errors: [{ field: 'hours', message: 'Use clock.' }] },
    );
}

/** Of every zone at once, so many years are the most that a small picture is made of. */
const mostYears = 40;

function refuseTooLong({ from, to }: Period): void {
  if (to - from <= mostYears * 366 * dayMs) return;
  throw invalidInput('The period is too long for levels of every zone.', [
    { field: 'to', message: `Ask for at most ${mostYears} years.` },
  ]);
}

function refuseTooManyPoints(
  { rules }: SiteReader,
  step: 'hour' | 'day' | 'week',
  period: Period,
): void {
  const hoursPerStep = { hour: 1, day: 24, week: 168 }[step];
  const points = (period.to - period.from) / (hoursPerStep * 3_600_000);
  if (points <= mostPoints || stepBorders(rules, step, period.from, period.to).length <= mostPoints)
    return;
  throw invalidInput(`The period has more than ${mostPoints} steps.`, [
    { field: 'step', message: 'Ask for longer steps, or for a shorter period.' },
  ]);
}

/** Beyond rounding: the two routes of Little's Law disagree, so derived data are wrong. */
const isUnexplained = ({ wipMean, unexplained }: { wipMean: number; unexplained: number }) =>
  Math.abs(unexplained) > 1e-9 * Math.max(1, wipMean);
