import type { Site } from '../../../shared/contracts/sites.ts';
import type { Upload } from '../../../shared/contracts/uploads.ts';
import { PreparedReading } from './prepared-reading.tsx';
import { previewOfStored, useReadAgain } from './queries.ts';

/** Reads an uploaded file again, by another plan or with the areas that are known by now. */
export function ReadAgain({
  site,
  upload,
  onDone,
}: {
  site: Site;
  upload: Upload;
  onDone: () => void;
}) {
  const again = useReadAgain(site.id, upload.id);
  return (
    <PreparedReading
      site={site}
      title={
        <>
          <strong>{upload.fileName}</strong> as it was uploaded,
        </>
      }
      previewBy={previewOfStored(site.id, upload.id)}
      firstPlan={upload.plan}
      action="Read this upload again"
      isPending={again.isPending}
      error={again.error}
      onRead={(plan) => again.mutate(plan, { onSuccess: onDone })}
      onLeave={onDone}
      leave="Leave it as it is"
    />
  );
}
