/** How much of a name's end is kept: names of many areas often differ there only. */
const keptEnd = 3;

/** A name that fits, with its middle left out where it is too long. */
export function shortened(name: string, most: number): string {
  if (name.length <= most) return name;
  if (most < keptEnd + 3) return `${name.slice(0, Math.max(1, most - 1))}…`;
  return `${name.slice(0, most - keptEnd - 1)}…${name.slice(-keptEnd)}`;
}
