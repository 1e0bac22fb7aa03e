-- Written by hand. What ended otherwise than as a good departure: few rows, found by an index of their own.
alter table upload_row add constraint upload_row_ending check (ending in ('scrapped', 'cancelled'));--> statement-breakpoint
alter table upload_row add constraint upload_row_event check (event in ('arrived', 'started', 'finished'));--> statement-breakpoint
create index record_by_ending on record (area_id, left_at) where ending is not null;--> statement-breakpoint
create index stay_by_ending on stay (zone_id, left_at) where ending is not null;--> statement-breakpoint
grant select, insert, update, delete on area_move to weirmark_app;--> statement-breakpoint
grant usage on all sequences in schema public to weirmark_app;--> statement-breakpoint

-- Every stay of every zone: an area's are columns of its records.
create or replace view zone_stay with (security_invoker = true) as
select
  organisation_id, site_id, area_id as zone_id, job_key, ordinal,
  stay_from as entered, started, left_at, length_class, quantity, finish_inferred,
  microseconds(started - stay_from) as queue_microseconds,
  case when not finish_inferred then microseconds(left_at - started) end as process_microseconds,
  upload_id, line, ending
from record
where stay_from is not null
union all
select
  organisation_id, site_id, zone_id, job_key, ordinal,
  entered, started, left_at, length_class, quantity, finish_inferred,
  case
    when left_at is not null then microseconds(left_at - entered) - process_microseconds
    else microseconds(started - entered)
  end as queue_microseconds,
  case when left_at is not null then process_microseconds end as process_microseconds,
  upload_id, line, ending
from stay;
