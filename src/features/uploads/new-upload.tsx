import { useState } from 'react';
import type { Site } from '../../../shared/contracts/sites.ts';
import { formatBytes } from '../../lib/format.ts';
import { FileDrop } from '../../ui/file-drop.tsx';
import { PreparedReading } from './prepared-reading.tsx';
import { previewOfFile, useUpload } from './queries.ts';

/** From a dropped file to its reading. */
export function NewUpload({ site }: { site: Site }) {
  const [file, setFile] = useState<File | null>(null);
  const upload = useUpload(site.id);
  if (!file) {
    return (
      <FileDrop
        label="Drop an export here"
        hint="CSV or other delimited text, XLSX or XES: a row per stay, per event, or per job."
        onFile={(chosen) => {
          upload.reset();
          setFile(chosen);
        }}
      />
    );
  }
  return (
    <PreparedReading
      key={`${file.name} ${file.lastModified}`}
      site={site}
      title={
        <>
          <strong>{file.name}</strong>, {formatBytes(file.size)},
        </>
      }
      previewBy={previewOfFile(site.id, file)}
      firstPlan={null}
      action="Read this file"
      isPending={upload.isPending}
      error={upload.error}
      onRead={(plan) => upload.mutate({ file, plan }, { onSuccess: () => setFile(null) })}
      onLeave={() => setFile(null)}
      leave="Choose another file"
    />
  );
}
