import { useQuery } from '@tanstack/react-query';
import { Link } from 'react-router-dom';
import { GradeSwatch } from '../../charts/grade-swatch.tsx';
import { poorDays, poorDaysInWords } from './poor-days.ts';
import { trustQuery } from './queries.ts';

/**
 * Beside figures of a period: on how many of its days they rest on poor data, with the way to the trust map.
 * Nothing where all is covered.
 */
export function TrustNote({
  siteId,
  period,
  areaIds,
  to,
}: {
  siteId: number;
  period: { from: string; to: string };
  /** The areas on which the figures rest. */
  areaIds: readonly number[];
  to: string;
}) {
  const trust = useQuery(trustQuery(siteId, period)).data;
  const cells = trust?.cells.filter((cell) => areaIds.includes(cell.zoneId)) ?? [];
  const words = poorDaysInWords(cells);
  if (words === '') return null;
  const some = areaIds.length > 1 ? ' in some area' : '';
  return (
    <p className="flex items-baseline gap-2 text-soft">
      <GradeSwatch grade={poorDays(cells).poor[0]?.grade ?? 'covered'} />
      <span>
        {words}
        {some}: see the <Link to={to}>trust map</Link>.
      </span>
    </p>
  );
}
