import { useState } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { readOriginal, readRefusedRows, type Upload } from '../../../shared/contracts/uploads.ts';
import { addressOf } from '../../api/call.ts';
import { formatBytes, formatCount, formatMoment } from '../../lib/format.ts';
import { Button } from '../../ui/button.tsx';
import { ConfirmDialog } from '../../ui/confirm-dialog.tsx';
import { Notice } from '../../ui/notice.tsx';
import { Progress } from '../../ui/progress.tsx';
import { PlanInWords } from './plan-in-words.tsx';
import { isUnderWay, useStopUpload, useWithdrawUpload } from './queries.ts';
import { ReadAgain } from './read-again.tsx';
import { RowAccountWords } from './row-account.tsx';

const statusWords: Record<Upload['status'], string> = {
  waiting: 'waits for its turn',
  reading: 'is being read',
  loading: 'is being loaded',
  loaded: 'loaded',
  failed: 'failed',
  withdrawn: 'withdrawn',
};

/** One upload: how far it is, what became of its rows, and what can be done with it. */
export function UploadItem({
  upload,
  site,
  mayChange,
}: {
  upload: Upload;
  site: Site;
  mayChange: boolean;
}) {
  const stop = useStopUpload(site.id);
  const withdraw = useWithdrawUpload(site.id);
  const [isReadingAgain, setReadingAgain] = useState(false);
  const original = addressOf(readOriginal, { params: { siteId: site.id, uploadId: upload.id } });
  const refused = addressOf(readRefusedRows, {
    params: { siteId: site.id, uploadId: upload.id },
  });
  return (
    <li className="flex flex-col gap-2 border-b border-hair py-4">
      <div className="flex flex-wrap items-baseline justify-between gap-x-4">
        <h3>
          <strong>{upload.fileName}</strong>{' '}
          <span className="text-soft">
            upload {upload.id}, {formatBytes(upload.progress.bytesTotal)}, received{' '}
            {formatMoment(upload.receivedAt, site.timeZone)}
            {upload.receivedBy ? ` from ${upload.receivedBy}` : ''}
          </span>
        </h3>
        <span className="font-medium">
          {upload.withdrawing ? 'is being withdrawn' : statusWords[upload.status]}
        </span>
      </div>
      {isUnderWay(upload) && !upload.withdrawing ? (
        <div className="flex items-end gap-4">
          <div className="flex-1">
            <Progress
              label={statusWords[upload.status]}
              share={shareOf(upload)}
              words={`${formatCount(upload.progress.rows)} rows, ${formatBytes(upload.progress.bytes)} of ${formatBytes(upload.progress.bytesTotal)}`}
            />
          </div>
          {mayChange ? (
            <Button onPress={() => stop.mutate(upload.id)}>Stop this upload</Button>
          ) : null}
        </div>
      ) : null}
      {upload.errorDetail ? <Notice kind="error">{upload.errorDetail}</Notice> : null}
      {upload.status === 'loaded' || upload.status === 'withdrawn' ? (
        <RowAccountWords account={upload.account} />
      ) : null}
      {upload.plan && !isUnderWay(upload) ? <PlanInWords plan={upload.plan} /> : null}
      <div className="flex flex-wrap items-center gap-4">
        {upload.account.refused > 0 ? (
          <a href={refused} download>
            Download the refused rows
          </a>
        ) : null}
        <a href={original} download>
          Download the file
        </a>
        {mayChange && isReadable(upload) ? (
          <Button onPress={() => setReadingAgain(true)}>Read it again another way</Button>
        ) : null}
        {mayChange && upload.status === 'loaded' && !upload.withdrawing ? (
          <ConfirmDialog
            trigger="Withdraw this upload"
            title={`Withdraw ${upload.fileName}?`}
            action="Withdraw this upload"
            onConfirm={() => withdraw.mutate(upload.id)}
          >
            All figures become as if this file had never come. What other uploads said of the same
            jobs holds again. The file itself is kept.
          </ConfirmDialog>
        ) : null}
      </div>
      {isReadingAgain ? (
        <ReadAgain site={site} upload={upload} onDone={() => setReadingAgain(false)} />
      ) : null}
    </li>
  );
}

/** Whether its file can be read again: it is loaded, or its reading failed. */
const isReadable = ({ status, withdrawing }: Upload): boolean =>
  (status === 'loaded' || status === 'failed') && !withdrawing;

const shareOf = ({ status, progress }: Upload): number | null => {
  if (status === 'waiting') return 0;
  if (status === 'loading') return null;
  return progress.bytesTotal > 0 ? progress.bytes / progress.bytesTotal : 0;
};
