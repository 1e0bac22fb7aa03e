import { sql } from 'drizzle-orm';

/** When a record's stay in its area begins, and the class of its length; of columns of `zone` and the record. */
export const stayFrom = sql`case counts_from when 'start' then started else entered end`;
export const lengthClass = sql`case when ${stayFrom} is not null then length_class(${stayFrom}, left_at) end`;
