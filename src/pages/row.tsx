import { useSuspenseQuery } from '@tanstack/react-query';
import { useParams } from 'react-router-dom';
import { paths } from '../app/paths.ts';
import { usePeriod } from '../features/period/use-period.ts';
import { uploadRowQuery } from '../features/uploads/queries.ts';
import { Breadcrumbs } from '../ui/breadcrumbs.tsx';
import { FigureList } from '../ui/figure-list.tsx';
import { PageHeading, Sentence } from '../ui/heading.tsx';
import { useSiteOfPage, useTitle } from './use-page.ts';

export function Component() {
  const site = useSiteOfPage();
  const { uploadId, line } = useParams();
  useTitle(`Line ${line ?? ''}`);
  const { search } = usePeriod(site);
  const row = useSuspenseQuery(uploadRowQuery(site.id, Number(uploadId), Number(line))).data;
  return (
    <div className="flex max-w-2xl flex-col gap-5">
      <Breadcrumbs
        links={[{ to: paths.intake(site.id) + search, label: 'Intake' }]}
        here={`upload ${row.uploadId}, line ${row.line}`}
      />
      <PageHeading>
        {row.fileName}, line {row.line}
      </PageHeading>
      <Sentence>This is the row as it came, cell by cell.</Sentence>
      <FigureList
        rows={row.header.map((name, index) => [
          name || `column ${index + 1}`,
          row.cells[index] || '(blank)',
        ])}
      />
    </div>
  );
}
