import {
  columnFilteringFeature,
  createFilteredRowModel,
  createSortedRowModel,
  filterFns,
  globalFilteringFeature,
  rowSortingFeature,
  sortFns,
  tableFeatures,
  useTable,
  type ColumnDef,
} from '@tanstack/react-table';
import { useVirtualizer } from '@tanstack/react-virtual';
import { useId, useMemo, useRef, useState, type ReactNode } from 'react';
import { downloadText, toCsv } from '../lib/csv.ts';
import { Button } from './button.tsx';

const features = tableFeatures({
  columnFilteringFeature,
  globalFilteringFeature,
  filteredRowModel: createFilteredRowModel(),
  filterFns,
  rowSortingFeature,
  sortedRowModel: createSortedRowModel(),
  sortFns,
});

export interface Column<Row> {
  id: string;
  header: string;
  /** What it is sorted by, and what stands in the CSV. */
  value: (row: Row) => string | number | null;
  /** What is shown, where it is more than the value. */
  cell?: (row: Row) => ReactNode;
  /** Figures stand to the right. */
  figure?: boolean;
  /** Holds buttons: there is nothing to sort by, nor to save. */
  isAction?: boolean;
}

const rowHeight = 30;
const virtualFrom = 60;

/** A table to sort, with the rows that are shown as CSV; long ones draw only the rows in sight. */
export function DataTable<Row extends object>({
  label,
  columns,
  rows,
  fileName,
  filterLabel,
}: {
  label: string;
  columns: readonly Column<Row>[];
  rows: readonly Row[];
  /** Name of the CSV; without one there is none to take. */
  fileName?: string;
  /** Names the field that filters the rows by what stands in them; without one there is none. */
  filterLabel?: string;
}) {
  const [filter, setFilter] = useState('');
  const definitions = useMemo(() => columns.map(toDefinition), [columns]);
  const data = useMemo(() => [...rows], [rows]);
  const table = useTable({
    features,
    columns: definitions,
    data,
    globalFilterFn: 'includesString',
    state: { globalFilter: filter },
  });
  const shown = table.getRowModel().rows;
  const scroller = useRef<HTMLDivElement>(null);
  const isLong = shown.length > virtualFrom;
  const virtual = useVirtualizer({
    count: shown.length,
    getScrollElement: () => scroller.current,
    estimateSize: () => rowHeight,
    overscan: 12,
    enabled: isLong,
  });
  const drawn = virtual.getVirtualItems();
  const visible = isLong ? drawn.flatMap((item) => shown[item.index] ?? []) : shown;
  const above = isLong ? (drawn[0]?.start ?? 0) : 0;
  const below = isLong ? virtual.getTotalSize() - (drawn.at(-1)?.end ?? 0) : 0;
  return (
    <div className="flex flex-col items-start gap-2">
      {filterLabel ? (
        <FilterField
          label={filterLabel}
          value={filter}
          found={shown.length}
          of={rows.length}
          onChange={setFilter}
        />
      ) : null}
      <div
        ref={scroller}
        className={`w-full overflow-x-auto ${isLong ? 'max-h-112 overflow-y-auto' : ''}`}
        tabIndex={0}
        role="region"
        aria-label={label}
      >
        <table className="w-full" aria-label={label} aria-rowcount={shown.length + 1}>
          <thead className="sticky top-0 bg-panel">
            {table.getHeaderGroups().map((group) => (
              <tr key={group.id} className="border-b border-ink">
                {group.headers.map((header, index) => {
                  const sorted = header.column.getIsSorted();
                  return (
                    <th
                      key={header.id}
                      scope="col"
                      aria-sort={
                        sorted === 'asc' ? 'ascending' : sorted === 'desc' ? 'descending' : 'none'
                      }
                      className={`px-2 py-1.5 align-bottom ${columns[index]?.figure ? 'text-right' : 'text-left'}`}
                    >
                      {columns[index]?.isAction ? (
                        <span className="sr-only">{columns[index].header}</span>
                      ) : (
                        <button
                          type="button"
                          onClick={header.column.getToggleSortingHandler()}
                          className={`cursor-pointer text-soft hover:text-ink ${columns[index]?.figure ? 'text-right' : 'text-left'}`}
                        >
                          {columns[index]?.header}
                          <SortSign direction={sorted} />
                        </button>
                      )}
                    </th>
                  );
                })}
              </tr>
            ))}
          </thead>
          <tbody>
            {above > 0 ? <SpacerRow height={above} columns={columns.length} /> : null}
            {visible.map((row) => (
              <tr key={row.id} className="border-b border-hair hover:bg-mist">
                {columns.map((column) => (
                  <td
                    key={column.id}
                    className={`px-2 py-1 whitespace-nowrap ${column.figure ? 'text-right' : 'text-left'}`}
                  >
                    {column.cell ? column.cell(row.original) : column.value(row.original)}
                  </td>
                ))}
              </tr>
            ))}
            {below > 0 ? <SpacerRow height={below} columns={columns.length} /> : null}
          </tbody>
        </table>
      </div>
      {fileName ? (
        <div className="no-print">
          <Button
            onPress={() => {
              const saved = columns.filter((column) => !column.isAction);
              const header = saved.map((column) => column.header);
              const cells = shown.map((row) => saved.map((column) => column.value(row.original)));
              downloadText(fileName, toCsv([header, ...cells]));
            }}
          >
            Save these rows as CSV
          </Button>
        </div>
      ) : null}
    </div>
  );
}

function FilterField(given: {
  label: string;
  value: string;
  found: number;
  of: number;
  onChange: (value: string) => void;
}) {
  const id = useId();
  return (
    <div className="no-print flex flex-wrap items-center gap-3">
      <label htmlFor={id} className="text-soft">
        {given.label}
      </label>
      <input
        id={id}
        type="search"
        value={given.value}
        onChange={(event) => given.onChange(event.target.value)}
        className="w-48 border border-soft bg-white px-2 py-1 text-ink"
      />
      <span role="status" className="text-soft">
        {given.value === '' ? '' : `${given.found} of ${given.of} rows`}
      </span>
    </div>
  );
}

function toDefinition<Row extends object>(column: Column<Row>): ColumnDef<typeof features, Row> {
  return {
    id: column.id,
    header: column.header,
    accessorFn: column.value,
    sortUndefined: 'last',
    sortFn: column.figure ? 'basic' : 'alphanumeric',
  };
}

function SpacerRow({ height, columns }: { height: number; columns: number }) {
  return (
    <tr aria-hidden="true">
      <td colSpan={columns} style={{ height }} />
    </tr>
  );
}

function SortSign({ direction }: { direction: false | 'asc' | 'desc' }) {
  if (!direction) return null;
  return (
    <svg width="8" height="6" viewBox="0 0 8 6" className="ml-1 inline" aria-hidden="true">
      <path d={direction === 'asc' ? 'M0 6l4-6 4 6z' : 'M0 0l4 6 4-6z'} fill="currentColor" />
    </svg>
  );
}
