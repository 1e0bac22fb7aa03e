import type { SampleRow } from '../sample.ts';
import type { Places } from '../shapes/places.ts';

const decimalComma = /^[+-]?(?:\d+|\d{1,3}(?:[. \u00A0\u202F’']\d{3})+),\d+$/u;
const decimalPoint = /^[+-]?(?:\d+|\d{1,3}(?:[, \u00A0\u202F’']\d{3})+)\.\d+$/u;
/** A comma before three digits may as well divide thousands. */
const mayBeThousands = /^[+-]?\d{1,3}[.,]\d{3}$/;

/**
 * What divides whole numbers from their fractions in the columns that hold numbers; null where no cell
 * tells.
 */
export function findDecimalSign(places: Places, rows: readonly SampleRow[]): '.' | ',' | null {
  const { quantity, workContent, value } = places.optional;
  let commas = 0;
  let points = 0;
  for (const { cells } of rows) {
    for (const place of [quantity, workContent, value]) {
      const cell = place === undefined ? '' : (cells[place] ?? '').trim();
      if (mayBeThousands.test(cell)) continue;
      if (decimalComma.test(cell)) commas += 1;
      else if (decimalPoint.test(cell)) points += 1;
    }
  }
  if (commas === points) return null;
  return commas > points ? ',' : '.';
}
