import { queryOptions } from '@tanstack/react-query';
import {
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

export const seriesQuery = (siteId: number, zoneId: number, asked: Asked, step: Step) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'series', asked, step],
    queryFn: ({ signal }) =>
      call(readSeries, { params: { siteId, zoneId }, query: { ...asked, step }, signal }),
  });

export const summaryQuery = (siteId: number, zoneId: number, asked: Asked) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'summary', asked],
    queryFn: ({ signal }) =>
      call(readSummary, { params: { siteId, zoneId }, query: asked, signal }),
  });

const mostInside = 1000;

export const insideQuery = (siteId: number, zoneId: number, at: string) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones', zoneId, 'inside', at],
    queryFn: ({ signal }) =>
      call(readInside, { params: { siteId, zoneId }, query: { at, limit: mostInside }, signal }),
  });
