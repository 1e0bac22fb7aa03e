import { infiniteQueryOptions, queryOptions } from '@tanstack/react-query';
import {
  readDepartures,
  readInside,
  readSeries,
  readSummary,
  type Step,
} from '../../../shared/contracts/figures.ts';
import { readZone } from '../../../shared/contracts/zones.ts';
import { call } from '../../api/call.ts';

export interface Asked {
  from: string;
  to: string;
  unit: 'jobs' | 'units';
}

export const zoneQuery = (siteId: number, zoneId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId],
    queryFn: ({ signal }) => call(readZone, { params: { siteId, zoneId }, signal }),
  });

/** The figures of the same zone stay in view while those of another period are on their way. */
const isOfZone = (query: { queryKey: readonly unknown[] } | undefined, zoneId: number): boolean =>
  query?.queryKey[3] === zoneId;

export const seriesQuery = (siteId: number, zoneId: number, asked: Asked, step: Step) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'series', asked, step],
    queryFn: ({ signal }) =>
      call(readSeries, { params: { siteId, zoneId }, query: { ...asked, step }, signal }),
    placeholderData: (before, query) => (isOfZone(query, zoneId) ? before : undefined),
  });

export const summaryQuery = (siteId: number, zoneId: number, asked: Asked) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'summary', asked],
    queryFn: ({ signal }) =>
      call(readSummary, { params: { siteId, zoneId }, query: asked, signal }),
    placeholderData: (before, query) => (isOfZone(query, zoneId) ? before : undefined),
  });

const insidePage = 1000;

/** Who was inside at a moment, longest first, page by page. */
export const insideQuery = (siteId: number, zoneId: number, at: string) =>
  infiniteQueryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'inside', at],
    queryFn: ({ signal, pageParam }) =>
      call(readInside, {
        params: { siteId, zoneId },
        query: { at, limit: insidePage, ...(pageParam === null ? {} : { cursor: pageParam }) },
        signal,
      }),
    initialPageParam: null as string | null,
    getNextPageParam: (last) => last.nextCursor,
  });

/** Who left within a period, latest first: asked for where there are few. */
export const departuresQuery = (siteId: number, zoneId: number, asked: Asked) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'departures', asked],
    queryFn: ({ signal }) =>
      call(readDepartures, { params: { siteId, zoneId }, query: { ...asked, limit: 100 }, signal }),
  });
