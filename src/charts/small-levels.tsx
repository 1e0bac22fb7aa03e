/** A level by step as a small filled line, from zero to its own highest; unknown steps are gaps. */
export function SmallLevels({
  levels,
  width,
  height,
}: {
  levels: readonly (number | null)[];
  width: number;
  height: number;
}) {
  const most = Math.max(1e-9, ...levels.map((level) => level ?? 0));
  const x = (index: number) => (index / Math.max(1, levels.length)) * width;
  const y = (level: number) => height - (level / most) * (height - 3);
  const runs = knownRuns(levels);
  return (
    <>
      {runs.map(({ from, values }) => {
        const line = values
          .map(
            (level, index) =>
              `H${round(x(from + index))}V${round(y(level))}H${round(x(from + index + 1))}`,
          )
          .join('');
        const start = `M${round(x(from))} ${height}`;
        return (
          <g key={from}>
            <path d={`${start}${line}V${height}Z`} className="fill-mist" />
            <path
              d={`M${round(x(from))} ${round(y(values[0] ?? 0))}${line}`}
              fill="none"
              className="stroke-water"
            />
          </g>
        );
      })}
      <line x1={0} x2={width} y1={height} y2={height} className="stroke-hair" />
    </>
  );
}

const round = (value: number) => Math.round(value * 10) / 10;

function knownRuns(levels: readonly (number | null)[]): { from: number; values: number[] }[] {
  const runs: { from: number; values: number[] }[] = [];
  for (const [index, level] of levels.entries()) {
    if (level === null) continue;
    const last = runs.at(-1);
    if (last && last.from + last.values.length === index) last.values.push(level);
    else runs.push({ from: index, values: [level] });
  }
  return runs;
}
