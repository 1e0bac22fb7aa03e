/** A drawing as text to keep as a golden picture: numbers to one decimal, a line for each part. */
export function roundedSvg(svg: string): string {
  return `${svg
    .replace(/-?\d+\.\d+(?:e-?\d+)?/g, (number) => String(Math.round(Number(number) * 10) / 10))
    .replace(/></g, '>\n<')}\n`;
}
