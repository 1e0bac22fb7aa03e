-- Written by hand: what the schema builder cannot say. Roles, grants, covering indexes, the views that
-- figures are read from, and the rule that the audit trail only grows.

do $$
begin
  if not exists (select from pg_roles where rolname = 'weirmark_app') then
    create role weirmark_app nologin nobypassrls;
  end if;
exception
  when duplicate_object or unique_violation then null;
end
$$;--> statement-breakpoint
grant usage on schema public to weirmark_app;--> statement-breakpoint
grant select, insert, update, delete on
  organisation, person, membership, session, access_key, sign_in_throttle, site_directory,
  site, shift, closure, zone, area, area_spelling, zone_area, zone_fact, cap,
  upload, upload_chunk, upload_area, upload_row, refused_row, column_plan,
  record, stay, level_hour, level_day, flow_day, flow_month
to weirmark_app;--> statement-breakpoint
grant select, insert on audit_entry to weirmark_app;--> statement-breakpoint
grant usage on all sequences in schema public to weirmark_app;--> statement-breakpoint
create function refuse_change_of_audit() returns trigger language plpgsql as $$
begin
  raise exception 'the audit trail only grows';
end
$$;--> statement-breakpoint
create trigger audit_entry_only_grows before update or delete on audit_entry
  for each statement execute function refuse_change_of_audit();--> statement-breakpoint
create trigger audit_entry_never_emptied before truncate on audit_entry
  for each statement execute function refuse_change_of_audit();--> statement-breakpoint

-- A length of time as a whole number, so that sums are exact.
create function microseconds(length interval) returns bigint
language sql immutable parallel safe as $$
  select (date_part('epoch', length) * 1000000)::bigint
$$;--> statement-breakpoint

-- ⌈log₄ of the seconds⌉ of a stay, 99 while open: a look-up by time needs to reach back 4^class seconds only.
create function length_class(entered timestamptz, left_at timestamptz) returns smallint
language sql immutable parallel safe as $$
  select case
    when left_at is null then 99
    else ceil(ln(greatest(date_part('epoch', left_at - entered), 1)) / ln(4.0::double precision))
  end::smallint
$$;--> statement-breakpoint

-- Who was inside at t, and who came or left in a period: one bounded look-up per length class.
create index record_by_length on record
  (organisation_id, site_id, area_id, length_class, stay_from)
  include (left_at, started, finish_inferred)
  where stay_from is not null;--> statement-breakpoint
create index stay_by_length on stay
  (organisation_id, site_id, zone_id, length_class, entered) include (left_at);--> statement-breakpoint

-- Every stay of every zone: an area's are columns of its records.
create view zone_stay with (security_invoker = true) as
select
  organisation_id, site_id, area_id as zone_id, job_key, ordinal,
  stay_from as entered, started, left_at, length_class, quantity, finish_inferred,
  microseconds(started - stay_from) as queue_microseconds,
  case when not finish_inferred then microseconds(left_at - started) end as process_microseconds,
  upload_id, line
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
  upload_id, line
from stay;--> statement-breakpoint

-- Every interval in which a job was in process inside a zone; an open end is null. Inferred finishes give none.
create view zone_process with (security_invoker = true) as
select
  organisation_id, site_id, area_id as zone_id, job_key, ordinal,
  stay_from as entered, left_at, length_class, quantity, started as process_from, left_at as process_to
from record
where stay_from is not null and started is not null and not finish_inferred
union all
select
  organisation_id, site_id, zone_id, job_key, ordinal,
  entered, left_at, length_class, quantity, interval_from, interval_to
from stay, unnest(process_from, process_to) as process (interval_from, interval_to);--> statement-breakpoint
grant select on zone_stay, zone_process to weirmark_app;
--> statement-breakpoint

-- Makes the application's login, or renews its password. DDL takes no bound values: format() quotes them.
create function weirmark_login(login text, secret text) returns void language plpgsql as $$
begin
  if not exists (select from pg_roles where rolname = login) then
    execute format('create role %I login nobypassrls in role weirmark_app password %L', login, secret);
  else
    execute format('alter role %I password %L', login, secret);
  end if;
end
$$;--> statement-breakpoint
revoke all on function weirmark_login(text, text) from public;--> statement-breakpoint

-- Sites with work that waits or was broken off, whatever the tenant: it tells their ids and nothing else.
create function sites_with_work() returns table (organisation_id integer, site_id integer)
language sql stable security definer set search_path = public as $$
  select upload.organisation_id, upload.site_id from upload
  where status in ('waiting', 'reading', 'loading')
    or (withdraw_requested_at is not null and status <> 'withdrawn')
  union
  select site.organisation_id, site.id from site where rebuild_requested_at is not null
  union
  select zone.organisation_id, zone.site_id from zone where state = 'deriving'
$$;--> statement-breakpoint
revoke all on function sites_with_work() from public;--> statement-breakpoint
grant execute on function sites_with_work() to weirmark_app;
