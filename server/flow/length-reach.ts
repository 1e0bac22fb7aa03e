import { sql } from 'drizzle-orm';

/**
 * Rows (class, reach): how far back a stay of a length class may have entered. A stay of class c lasts at
 * most 4^c seconds; class 99 is open. With it, every look-up by time is one bounded look-up per class;
 * `offset 0` in each keeps the planner from making one large join of them.
 */
export const lengthReaches = sql`
  select
    class::smallint,
    case when class = 99 then interval '200 years'
      else make_interval(secs => 4.0::double precision ^ class + 1)
    end as reach
  from unnest(array[0,1,2,3,4,5,6,7,8,9,10,11,12,13,14,15,16,99]) as class`;
