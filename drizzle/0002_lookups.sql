-- Written by hand. A zone belongs to one site: with organisation and site before it, a look-up by zone would
-- compare two columns more at each step, and adding an entry cost twice as much.
drop index record_by_length;--> statement-breakpoint
create index record_by_length on record (area_id, length_class, stay_from)
  include (organisation_id, site_id, left_at, started, finish_inferred)
  where stay_from is not null;--> statement-breakpoint
drop index stay_by_length;--> statement-breakpoint
create index stay_by_length on stay (zone_id, length_class, entered)
  include (organisation_id, site_id, left_at);--> statement-breakpoint

-- Every span of time in which a job raises the levels of a zone: of those inside from `inside_from`, of those
-- in process from `process_from`, either null where it does not. Both end at `until`, open where null.
-- `entered`, `left_at` and `length_class` are those of the whole stay, to find it by. Inferred finishes
-- give no time in process.
drop view zone_process;--> statement-breakpoint
create view zone_span with (security_invoker = true) as
select
  organisation_id, site_id, area_id as zone_id, job_key, ordinal,
  stay_from as entered, left_at, length_class, quantity,
  stay_from as inside_from, case when not finish_inferred then started end as process_from,
  left_at as until
from record
where stay_from is not null
union all
select
  organisation_id, site_id, zone_id, job_key, ordinal, entered, left_at, length_class, quantity,
  entered, null, left_at
from stay
union all
select
  organisation_id, site_id, zone_id, job_key, ordinal, entered, left_at, length_class, quantity,
  null, interval_from, interval_to
from stay, unnest(process_from, process_to) as process (interval_from, interval_to);--> statement-breakpoint
grant select on zone_span to weirmark_app;
