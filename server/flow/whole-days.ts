import { stepBorders } from '../../shared/local-time.ts';
import type { Period, SiteReader } from './zone-reader.ts';

/** The whole local days within a period; empty at its end where there is none. */
export function wholeDays({ rules }: SiteReader, period: Period): Period {
  const [first, second] = stepBorders(rules, 'day', period.from, period.from + 1);
  const from = first === period.from ? first : (second ?? period.to);
  const to = stepBorders(rules, 'day', period.to, period.to + 1)[0] ?? period.to;
  return from < to ? { from, to } : { from: period.to, to: period.to };
}
