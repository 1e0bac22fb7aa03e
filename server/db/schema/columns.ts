import { sql } from 'drizzle-orm';
import { customType, integer, pgPolicy, timestamp } from 'drizzle-orm/pg-core';

/** A moment, to the microsecond, in UTC. */
export const instant = () => timestamp({ withTimezone: true });

export const bytes = customType<{ data: Buffer }>({ dataType: () => 'bytea' });

/** Text ordered by its bytes: keys compare alike everywhere, and ranges of them use the index. */
export const plainText = customType<{ data: string }>({ dataType: () => 'text collate "C"' });

/** The two columns with which every tenant table's primary key begins. */
export const tenantColumns = () => ({
  organisationId: integer().notNull(),
  siteId: integer().notNull(),
});

/** The tenant of the running transaction; null outside `withTenant`, so that every policy then refuses. */
const currentOrganisation = sql`(select nullif(current_setting('weirmark.organisation_id', true), '')::integer)`;

/** Row-level security of every tenant table: a row is seen and written only under its organisation. */
export const tenantPolicy = () =>
  pgPolicy('of_the_organisation', {
    as: 'permissive',
    for: 'all',
    to: 'public',
    using: sql`organisation_id = ${currentOrganisation}`,
    withCheck: sql`organisation_id = ${currentOrganisation}`,
  });
