import type { ZoneRules } from '../../../shared/local-time.ts';
import type { Transaction } from '../../db/client.ts';
import type { AreaMove } from '../area-moves.ts';

/** What every step of deriving needs: where, in which transaction, and the site's settings. */
export interface Derivation {
  tx: Transaction;
  organisationId: number;
  siteId: number;
  rules: ZoneRules;
  /** Take a lost finish as the job's next start, or leave the stay open. */
  inferLostFinish: boolean;
  /** A job key that returns after an idle gap of more days is a new pass. */
  newPassAfterDays: number;
  /** The moves of areas, read once: whoever makes one meanwhile asks for a rebuild. */
  moves: readonly AreaMove[];
  /** What the rows told so far are; set where they are gathered. */
  told?: ToldKinds;
}

/** What gathering told rows needs of a derivation. */
export type ToldSource = Pick<Derivation, 'tx' | 'organisationId' | 'siteId' | 'moves' | 'told'>;

/** Kinds of told rows that most sites have none of, so that looking after them can be left out. */
export interface ToldKinds {
  /** Some rows tell one event each. */
  events: boolean;
  /** Some upload is the whole truth for its areas over its span. */
  replaced: boolean;
}
