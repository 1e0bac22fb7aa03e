import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import {
  createUpload,
  listUploads,
  previewUpload,
  readUploadRow,
  stopUpload,
  withdrawUpload,
  type Upload,
} from '../../../shared/contracts/uploads.ts';
import { call } from '../../api/call.ts';

const watchEveryMs = 500;
/** The beginning of a file is enough to guess how it is to be read. */
const previewBytes = 256 * 1024;

export const isUnderWay = (upload: Upload) =>
  upload.withdrawing || ['waiting', 'reading', 'loading'].includes(upload.status);

/** The uploads of a site, watched while any of them is under way. */
export const uploadsQuery = (siteId: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'uploads'],
    queryFn: ({ signal }) => call(listUploads, { params: { siteId }, signal }),
    refetchInterval: (query) => (query.state.data?.some(isUnderWay) ? watchEveryMs : false),
  });

/** How a file would be read: by the given plan, or by a guess. Nothing of it is kept. */
export const previewQuery = (siteId: number, file: File, plan: ColumnPlan | null) =>
  queryOptions({
    queryKey: ['site', siteId, 'preview', file.name, file.size, file.lastModified, plan],
    queryFn: ({ signal }) => {
      const form = new FormData();
      if (plan) form.set('plan', JSON.stringify(plan));
      form.set('file', file.slice(0, previewBytes), file.name);
      return call(previewUpload, { params: { siteId }, form, signal });
    },
    staleTime: Infinity,
  });

export const uploadRowQuery = (siteId: number, uploadId: number, line: number) =>
  queryOptions({
    queryKey: ['site', siteId, 'uploads', uploadId, 'rows', line],
    queryFn: ({ signal }) => call(readUploadRow, { params: { siteId, uploadId, line }, signal }),
    staleTime: Infinity,
  });

export function useUpload(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ file, plan }: { file: File; plan: ColumnPlan }) => {
      const form = new FormData();
      form.set('plan', JSON.stringify(plan));
      form.set('file', file);
      return call(createUpload, { params: { siteId }, form });
    },
    onSuccess: () => client.invalidateQueries({ queryKey: ['site', siteId] }),
  });
}

export function useStopUpload(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (uploadId: number) => call(stopUpload, { params: { siteId, uploadId } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['site', siteId] }),
  });
}

export function useWithdrawUpload(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (uploadId: number) => call(withdrawUpload, { params: { siteId, uploadId } }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['site', siteId] }),
  });
}
