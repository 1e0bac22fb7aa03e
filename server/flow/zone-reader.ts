import type { ZoneRules } from '../../shared/local-time.ts';
import type { Transaction } from '../db/client.ts';

/** Where figures are read, in a transaction under the tenant. */
export interface SiteReader {
  tx: Transaction;
  organisationId: number;
  siteId: number;
  rules: ZoneRules;
}

/** What a zone is, as far as reading its figures depends on it. */
export interface FigureZone {
  id: number;
  hasStarts: boolean;
  hasQuantities: boolean;
  dataUntil: number | null;
  warmUntil: number | null;
}

/** Half-open, in milliseconds. */
export interface Period {
  from: number;
  to: number;
}
