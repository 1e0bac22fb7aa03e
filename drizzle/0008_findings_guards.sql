-- Written by hand: grants, and that sites whose findings or write-offs wait are found.
grant select, insert, update, delete on finding, finding_act, plant_event, write_off to weirmark_app;--> statement-breakpoint
grant usage on all sequences in schema public to weirmark_app;--> statement-breakpoint
create index write_off_waiting on write_off (site_id) where applied_at is null or taken_back_at is not null;--> statement-breakpoint

-- Sites with work that waits or was broken off, whatever the tenant: it tells their ids and nothing else.
create or replace function sites_with_work() returns table (organisation_id integer, site_id integer)
language sql stable security definer set search_path = public as $$
  select upload.organisation_id, upload.site_id from upload
  where status in ('waiting', 'reading', 'loading')
    or (withdraw_requested_at is not null and status <> 'withdrawn')
  union
  select site.organisation_id, site.id from site
  where rebuild_requested_at is not null or findings_requested_at is not null
  union
  select zone.organisation_id, zone.site_id from zone where state = 'deriving'
  union
  select write_off.organisation_id, write_off.site_id from write_off
  where applied_at is null or taken_back_at is not null
$$;--> statement-breakpoint

-- What stands already is looked at once.
update site set findings_requested_at = now() where data_version > 0;
