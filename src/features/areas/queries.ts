import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import { moveArea, readAreas, undoAreaMove } from '../../../shared/contracts/areas.ts';
import { changeZone, createZone, listZones } from '../../../shared/contracts/zones.ts';
import { call } from '../../api/call.ts';

/** The areas of a site, how files write them, and the moves in force. */
export const areasQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'areas'],
    queryFn: ({ signal }) => call(readAreas, { params: { siteId }, signal }),
  });

/** The loops of a site, for which areas they name. */
export const loopsQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'zones'],
    queryFn: ({ signal }) => call(listZones, { params: { siteId }, signal }),
    select: (zones) => zones.filter((zone) => zone.kind === 'loop'),
  });

export interface WantedMove {
  areaId: number;
  targetAreaId: number;
  from: string | null;
}

/** Whatever is shown of the site is asked for again: figures follow areas. */
function useChangeOfSite<Input>(siteId: number, mutationFn: (input: Input) => Promise<unknown>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn,
    onSuccess: () => client.invalidateQueries({ queryKey: ['site', siteId] }),
  });
}

export const useMoveArea = (siteId: number) =>
  useChangeOfSite(siteId, (body: WantedMove) => call(moveArea, { params: { siteId }, body }));

export const useUndoMove = (siteId: number) =>
  useChangeOfSite(siteId, (moveId: number) => call(undoAreaMove, { params: { siteId, moveId } }));

export interface AreaChanges {
  name?: string;
  servers?: number | null;
  serversFrom?: string;
}

export const useChangeArea = (siteId: number, zoneId: number) =>
  useChangeOfSite(siteId, (body: AreaChanges) =>
    call(changeZone, { params: { siteId, zoneId }, body }),
  );

export const useAddArea = (siteId: number) =>
  useChangeOfSite(siteId, (name: string) =>
    call(createZone, { params: { siteId }, body: { kind: 'area', name } }),
  );
