import { queryOptions, useMutation, useQueryClient } from '@tanstack/react-query';
import type { ColumnPlan } from '../../../shared/contracts/plan.ts';
import {
  createUpload,
  listUploads,
  previewStoredUpload,
  previewUpload,
  readUploadAgain,
  readUploadRow,
  stopUpload,
  withdrawUpload,
  type Upload,
  type UploadPreview,
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

/** A workbook is a zip archive, whose table of contents stands at its end: all of it is needed. */
async function isWorkbook(file: File): Promise<boolean> {
  const [p, k] = new Uint8Array(await file.slice(0, 2).arrayBuffer());
  return p === 0x50 && k === 0x4b;
}

/** How a file would be read, as a query: by a plan, or by the one that is detected. Nothing is kept. */
export type PreviewBy = (plan: ColumnPlan | null) => {
  queryKey: readonly unknown[];
  queryFn: (context: { signal: AbortSignal }) => Promise<UploadPreview>;
  staleTime: number;
};

/** The preview of a file that was not sent yet: its beginning is sent, or all of a workbook. */
export const previewOfFile =
  (siteId: number, file: File): PreviewBy =>
  (plan) => ({
    queryKey: ['site', siteId, 'preview', file.name, file.size, file.lastModified, plan],
    queryFn: async ({ signal }) => {
      const form = new FormData();
      if (plan) form.set('plan', JSON.stringify(plan));
      const sent = (await isWorkbook(file)) ? file : file.slice(0, previewBytes);
      form.set('file', sent, file.name);
      return call(previewUpload, { params: { siteId }, form, signal });
    },
    staleTime: Infinity,
  });

/** The preview of a file that was uploaded. */
export const previewOfStored =
  (siteId: number, uploadId: number): PreviewBy =>
  (plan) => ({
    queryKey: ['site', siteId, 'uploads', uploadId, 'preview', plan],
    queryFn: ({ signal }) =>
      call(previewStoredUpload, {
        params: { siteId, uploadId },
        body: plan ? { plan } : {},
        signal,
      }),
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

export function useReadAgain(siteId: number, uploadId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (plan: ColumnPlan) =>
      call(readUploadAgain, { params: { siteId, uploadId }, body: { plan } }),
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
