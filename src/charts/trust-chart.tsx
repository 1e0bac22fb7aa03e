import { useId, type ReactNode } from 'react';
import type { TrustGrade } from '../../shared/trust.ts';
import { GradePatterns, gradeFill } from './grade-swatch.tsx';
import { shortened } from './shortened.ts';
import { bandsOf, labelledColumns, type TrustColumn } from './trust-layout.ts';

const rowHeight = 24;
const fieldHeight = 16;
const head = 6;
const foot = 20;
export const trustNamesWidth = 136;

/** One area: its grade on each day, null where it has none. */
export interface TrustRow {
  id: number;
  name: string;
  grades: readonly (TrustGrade | null)[];
}

/**
 * Areas by days, each field in the hatching of its grade; a field of several days is split by how many have
 * which. One field may be chosen, and is framed.
 *
 * @param wrapRow puts a row into its link, whose accessible name sums the row up
 */
export function TrustChart({
  rows,
  columns,
  width,
  chosen,
  formatColumn,
  onPick,
  wrapRow,
}: {
  rows: readonly TrustRow[];
  columns: readonly TrustColumn[];
  width: number;
  chosen: { rowId: number; column: number } | null;
  formatColumn: (column: TrustColumn) => string;
  onPick: (rowId: number, column: number) => void;
  wrapRow: (row: TrustRow, picture: ReactNode) => ReactNode;
}) {
  const id = useId();
  const height = head + rows.length * rowHeight + foot;
  const fieldsWidth = width - trustNamesWidth;
  return (
    <svg
      width={width}
      height={height}
      viewBox={`0 0 ${width} ${height}`}
      className="block overflow-visible"
    >
      <GradePatterns id={id} />
      {rows.map((row, index) => (
        <g key={row.id} transform={`translate(0 ${head + index * rowHeight})`}>
          {wrapRow(row, <RowName name={row.name} />)}
          <g transform={`translate(${trustNamesWidth} 0)`}>
            {columns.map((column, place) => (
              <g
                key={column.first}
                onClick={() => onPick(row.id, place)}
                className="cursor-pointer"
              >
                <Field id={id} row={row} column={column} />
              </g>
            ))}
            {columns.map((column, place) =>
              chosen?.rowId === row.id && chosen.column === place ? (
                <rect
                  key={column.first}
                  x={column.x - 1}
                  y={-1}
                  width={column.width + 1}
                  height={fieldHeight + 2}
                  fill="none"
                  strokeWidth={2}
                  className="stroke-ink"
                />
              ) : null,
            )}
          </g>
        </g>
      ))}
      <g transform={`translate(${trustNamesWidth} ${height - foot})`}>
        {labelledColumns(columns, fieldsWidth).map((column) => (
          <g key={column.first}>
            <line
              x1={column.x + 0.5}
              x2={column.x + 0.5}
              y1={-4}
              y2={2}
              className="stroke-soft"
              shapeRendering="crispEdges"
            />
            <text x={column.x} y={14} className="fill-soft text-[11px]">
              {formatColumn(column)}
            </text>
          </g>
        ))}
      </g>
    </svg>
  );
}

function RowName({ name }: { name: string }) {
  return (
    <>
      <rect x={-2} y={-2} width={trustNamesWidth - 4} height={fieldHeight + 4} fill="transparent" />
      <text x={0} y={12} className="fill-ink text-label group-hover:underline">
        {shortened(name, 17)}
      </text>
    </>
  );
}

/** Fields leave a hair between them where there is room for it. */
const gapOf = (column: TrustColumn) => (column.width >= 8 ? 1 : 0);

function Field({ id, row, column }: { id: string; row: TrustRow; column: TrustColumn }) {
  const width = Math.max(1, column.width - gapOf(column));
  return bandsOf(row.grades.slice(column.first, column.last + 1)).map((band) => {
    const y = band.from * fieldHeight;
    const height = (band.to - band.from) * fieldHeight;
    return band.grade === null ? (
      <rect
        key="none"
        x={column.x}
        y={y + height / 2}
        width={width}
        height={1}
        className="fill-hair"
      />
    ) : (
      <rect
        key={band.grade}
        x={column.x}
        y={y}
        width={width}
        height={height}
        {...gradeFill(id, band.grade)}
      />
    );
  });
}
