import type { Area, Areas } from '../../../shared/contracts/areas.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { formatDay, plural } from '../../lib/format.ts';
import { PanelHeading } from '../../ui/heading.tsx';
import { MoveDialog } from './move-dialog.tsx';

/** Areas that may be one, in words; merging them is left to a person. */
export function LikelyPairs({
  site,
  all,
  mayChange,
}: {
  site: Site;
  all: Areas;
  mayChange: boolean;
}) {
  const pairs = all.likelyPairs.flatMap((pair) => {
    const area = all.areas.find((each) => each.id === pair.areaId);
    const target = all.areas.find((each) => each.id === pair.targetAreaId);
    return area && target ? [{ area, target }] : [];
  });
  if (pairs.length === 0) return null;
  return (
    <section className="border-l-4 border-water py-2 pl-4">
      <PanelHeading>Are these one area?</PanelHeading>
      <p className="max-w-prose py-2 text-soft">
        Their names are alike, no upload tells of both over the same time, and no job was in both at
        once.
      </p>
      <ul>
        {pairs.map(({ area, target }) => (
          <li
            key={`${area.id} ${target.id}`}
            className="flex flex-wrap items-center justify-between gap-3 border-b border-hair py-2"
          >
            <span>
              {described(area, site)} and {described(target, site)}
            </span>
            {mayChange ? (
              <MoveDialog trigger="Merge" site={site} all={all} area={area} target={target} />
            ) : null}
          </li>
        ))}
      </ul>
    </section>
  );
}

function described({ name, rows, firstAt, latestAt }: Area, { timeZone }: Site): string {
  const span = `${formatDay(firstAt, timeZone)} to ${formatDay(latestAt, timeZone)}`;
  return `“${name}” (${plural(rows, 'row')}, ${span})`;
}
