import { Link } from 'react-router-dom';
import type { Area, Areas } from '../../../shared/contracts/areas.ts';
import type { Site } from '../../../shared/contracts/sites.ts';
import { formatCount, formatDay } from '../../lib/format.ts';
import { DataTable, type Column } from '../../ui/data-table.tsx';
import { ChangeDialog } from './change-dialog.tsx';
import { MoveDialog } from './move-dialog.tsx';
import { shownAreas, spellingsInWords } from './words.ts';

/** The areas in order of flow; with what can be done to each, for those who may. */
export function AreaTable({
  site,
  all,
  mayChange,
  linkTo,
}: {
  site: Site;
  all: Areas;
  mayChange: boolean;
  linkTo: (areaId: number) => string;
}) {
  const shown = shownAreas(all);
  const columns: Column<Area>[] = [
    { id: 'place', header: 'place', figure: true, value: (area) => area.position },
    {
      id: 'name',
      header: 'area',
      value: (area) => area.name,
      cell: (area) => <Link to={linkTo(area.id)}>{area.name}</Link>,
    },
    {
      id: 'spellings',
      header: 'files write',
      value: (area) => spellingsInWords(area, all),
      cell: (area) => (
        <span className="block min-w-28 whitespace-normal">{spellingsInWords(area, all)}</span>
      ),
    },
    {
      id: 'servers',
      header: 'servers',
      figure: true,
      value: (area) => area.servers,
      cell: (area) => (
        <span className="block whitespace-normal">{serversInWords(area, site.timeZone)}</span>
      ),
    },
    {
      id: 'rows',
      header: 'rows',
      figure: true,
      value: (area) => area.rows,
      cell: (area) => formatCount(area.rows),
    },
    day('first', 'first seen', (area) => area.firstAt, site),
    day('last', 'last seen', (area) => area.latestAt, site),
  ];
  const actions: Column<Area> = {
    id: 'actions',
    header: 'what you can do',
    isAction: true,
    value: () => null,
    cell: (area) => (
      <span className="flex flex-col items-start gap-1 xl:flex-row xl:gap-2">
        <ChangeDialog site={site} area={area} />
        {shown.length > 1 ? <MoveDialog trigger="Merge" site={site} all={all} area={area} /> : null}
      </span>
    ),
  };
  return (
    <DataTable
      label="Areas"
      columns={mayChange ? [...columns, actions] : columns}
      rows={shown}
      fileName="areas.csv"
      filterLabel="Rows with"
    />
  );
}

function serversInWords({ servers, serversFrom }: Area, timeZone: string): string {
  if (servers === null) return formatCount(null);
  const since = serversFrom === null ? '' : ` since ${formatDay(serversFrom, timeZone)}`;
  return formatCount(servers) + since;
}

const day = (
  id: string,
  header: string,
  value: (area: Area) => string | null,
  { timeZone }: Site,
): Column<Area> => ({
  id,
  header,
  value,
  cell: (area) => formatDay(value(area), timeZone),
});
