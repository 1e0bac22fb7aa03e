CREATE TYPE "public"."level_measure" AS ENUM('inside_jobs', 'in_process_jobs', 'inside_units', 'in_process_units');--> statement-breakpoint
CREATE TYPE "public"."member_role" AS ENUM('admin', 'analyst', 'supervisor', 'consultant');--> statement-breakpoint
CREATE TYPE "public"."lost_finish" AS ENUM('infer', 'leave-open');--> statement-breakpoint
CREATE TYPE "public"."upload_status" AS ENUM('receiving', 'waiting', 'reading', 'loading', 'loaded', 'failed', 'withdrawn');--> statement-breakpoint
CREATE TYPE "public"."counts_from" AS ENUM('arrival', 'start');--> statement-breakpoint
CREATE TYPE "public"."figure_unit" AS ENUM('jobs', 'units');--> statement-breakpoint
CREATE TYPE "public"."spelling_origin" AS ENUM('declared', 'found');--> statement-breakpoint
CREATE TYPE "public"."zone_fact_kind" AS ENUM('servers', 'owner', 'position', 'value');--> statement-breakpoint
CREATE TYPE "public"."zone_kind" AS ENUM('area', 'loop', 'site');--> statement-breakpoint
CREATE TYPE "public"."zone_state" AS ENUM('ready', 'deriving');--> statement-breakpoint
CREATE TABLE "audit_entry" (
	"organisation_id" integer NOT NULL,
	"site_id" integer DEFAULT 0 NOT NULL,
	"id" bigint GENERATED ALWAYS AS IDENTITY (sequence name "audit_entry_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1 CACHE 1),
	"at" timestamp with time zone NOT NULL,
	"person_id" integer,
	"access_key_id" integer,
	"action" text NOT NULL,
	"subject_kind" text NOT NULL,
	"subject_id" text NOT NULL,
	"before" jsonb,
	"after" jsonb,
	"request_id" text,
	CONSTRAINT "audit_entry_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "audit_entry" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "flow_day" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"day" date NOT NULL,
	"starts" timestamp with time zone NOT NULL,
	"departures" integer NOT NULL,
	"flow_microseconds" numeric NOT NULL,
	"queue_known" integer NOT NULL,
	"queue_microseconds" numeric NOT NULL,
	"process_known" integer NOT NULL,
	"process_microseconds" numeric NOT NULL,
	"bins" integer[] NOT NULL,
	"counts" integer[] NOT NULL,
	CONSTRAINT "flow_day_organisation_id_site_id_zone_id_day_pk" PRIMARY KEY("organisation_id","site_id","zone_id","day")
);
--> statement-breakpoint
ALTER TABLE "flow_day" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "flow_month" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"month" date NOT NULL,
	"departures" integer NOT NULL,
	"flow_microseconds" numeric NOT NULL,
	"queue_known" integer NOT NULL,
	"queue_microseconds" numeric NOT NULL,
	"process_known" integer NOT NULL,
	"process_microseconds" numeric NOT NULL,
	"bins" integer[] NOT NULL,
	"counts" integer[] NOT NULL,
	CONSTRAINT "flow_month_organisation_id_site_id_zone_id_month_pk" PRIMARY KEY("organisation_id","site_id","zone_id","month")
);
--> statement-breakpoint
ALTER TABLE "flow_month" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "level_day" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"measure" "level_measure" NOT NULL,
	"day" date NOT NULL,
	"starts" timestamp with time zone NOT NULL,
	"ends" timestamp with time zone NOT NULL,
	"level_start" numeric NOT NULL,
	"level_end" numeric NOT NULL,
	"ups" numeric NOT NULL,
	"downs" numeric NOT NULL,
	"integral" numeric NOT NULL,
	"peak" numeric NOT NULL,
	CONSTRAINT "level_day_organisation_id_site_id_zone_id_measure_day_pk" PRIMARY KEY("organisation_id","site_id","zone_id","measure","day")
);
--> statement-breakpoint
ALTER TABLE "level_day" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "level_hour" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"measure" "level_measure" NOT NULL,
	"hour" timestamp with time zone NOT NULL,
	"ups" numeric NOT NULL,
	"downs" numeric NOT NULL,
	"up_offset" numeric NOT NULL,
	"down_offset" numeric NOT NULL,
	"highest" numeric NOT NULL,
	CONSTRAINT "level_hour_organisation_id_site_id_zone_id_measure_hour_pk" PRIMARY KEY("organisation_id","site_id","zone_id","measure","hour")
);
--> statement-breakpoint
ALTER TABLE "level_hour" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "access_key" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "access_key_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"name" text NOT NULL,
	"key_hash" text NOT NULL,
	"created_by" integer,
	"created_at" timestamp with time zone NOT NULL,
	"revoked_at" timestamp with time zone,
	CONSTRAINT "access_key_keyHash_unique" UNIQUE("key_hash")
);
--> statement-breakpoint
CREATE TABLE "membership" (
	"organisation_id" integer NOT NULL,
	"person_id" integer NOT NULL,
	"role" "member_role" NOT NULL,
	"ends_at" timestamp with time zone,
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "membership_organisation_id_person_id_pk" PRIMARY KEY("organisation_id","person_id")
);
--> statement-breakpoint
CREATE TABLE "organisation" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "organisation_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"name" text NOT NULL,
	"created_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "person" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "person_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"email" text NOT NULL,
	"name" text NOT NULL,
	"password_hash" text NOT NULL,
	"password_changed_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "person_email_unique" UNIQUE("email")
);
--> statement-breakpoint
CREATE TABLE "server_secret" (
	"name" text PRIMARY KEY NOT NULL,
	"value" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "session" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person_id" integer NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"rotated_at" timestamp with time zone NOT NULL,
	"rotation" integer DEFAULT 0 NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"revoked_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "sign_in_throttle" (
	"key" text PRIMARY KEY NOT NULL,
	"points" integer DEFAULT 0 NOT NULL,
	"expire" bigint
);
--> statement-breakpoint
CREATE TABLE "record" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"job_key" text collate "C" NOT NULL,
	"ordinal" integer NOT NULL,
	"area_id" integer NOT NULL,
	"pass" integer NOT NULL,
	"arrived" timestamp with time zone,
	"started" timestamp with time zone,
	"finished" timestamp with time zone,
	"record_key" text collate "C",
	"quantity" numeric,
	"family" text,
	"due" timestamp with time zone,
	"priority" text,
	"work_content" numeric,
	"value" numeric,
	"resource" text,
	"status" text,
	"parent" text,
	"upload_id" integer NOT NULL,
	"line" integer NOT NULL,
	"part" smallint NOT NULL,
	"entered" timestamp with time zone,
	"left_at" timestamp with time zone,
	"finish_inferred" boolean NOT NULL,
	"stay_from" timestamp with time zone,
	"length_class" smallint,
	CONSTRAINT "record_organisation_id_site_id_job_key_ordinal_pk" PRIMARY KEY("organisation_id","site_id","job_key","ordinal")
);
--> statement-breakpoint
ALTER TABLE "record" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "stay" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"job_key" text collate "C" NOT NULL,
	"zone_id" integer NOT NULL,
	"ordinal" integer NOT NULL,
	"entered" timestamp with time zone NOT NULL,
	"started" timestamp with time zone,
	"left_at" timestamp with time zone,
	"length_class" smallint NOT NULL,
	"process_microseconds" bigint,
	"process_from" timestamp with time zone[] NOT NULL,
	"process_to" timestamp with time zone[] NOT NULL,
	"quantity" numeric,
	"finish_inferred" boolean NOT NULL,
	"upload_id" integer NOT NULL,
	"line" integer NOT NULL,
	CONSTRAINT "stay_organisation_id_site_id_job_key_zone_id_ordinal_pk" PRIMARY KEY("organisation_id","site_id","job_key","zone_id","ordinal")
);
--> statement-breakpoint
ALTER TABLE "stay" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "closure" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"day" date NOT NULL,
	"name" text NOT NULL,
	CONSTRAINT "closure_organisation_id_site_id_day_pk" PRIMARY KEY("organisation_id","site_id","day")
);
--> statement-breakpoint
ALTER TABLE "closure" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "shift" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "shift_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"weekday" smallint NOT NULL,
	"start_minute" smallint NOT NULL,
	"end_minute" smallint NOT NULL,
	"valid_from" date NOT NULL,
	"valid_until" date,
	CONSTRAINT "shift_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "shift" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "site" (
	"organisation_id" integer NOT NULL,
	"id" integer NOT NULL,
	"name" text NOT NULL,
	"time_zone" text NOT NULL,
	"currency" text DEFAULT 'EUR' NOT NULL,
	"value_per_job" numeric,
	"lost_finish" "lost_finish" DEFAULT 'infer' NOT NULL,
	"new_pass_after_days" integer DEFAULT 90 NOT NULL,
	"data_version" bigint DEFAULT 0 NOT NULL,
	"rebuild_requested_at" timestamp with time zone,
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "site_organisation_id_id_pk" PRIMARY KEY("organisation_id","id"),
	CONSTRAINT "site_name_once" UNIQUE("organisation_id","name")
);
--> statement-breakpoint
ALTER TABLE "site" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "site_directory" (
	"site_id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "site_directory_site_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"organisation_id" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "column_plan" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "column_plan_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"name" text NOT NULL,
	"header_fingerprint" text NOT NULL,
	"plan" jsonb NOT NULL,
	"saved_by" integer,
	"saved_at" timestamp with time zone NOT NULL,
	"retired_on" date,
	CONSTRAINT "column_plan_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "column_plan" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "refused_row" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"upload_id" integer NOT NULL,
	"id" bigserial NOT NULL,
	"line" integer NOT NULL,
	"part" smallint DEFAULT 0 NOT NULL,
	"reason" text NOT NULL,
	"detail" text NOT NULL,
	"raw" text NOT NULL,
	CONSTRAINT "refused_row_organisation_id_site_id_upload_id_id_pk" PRIMARY KEY("organisation_id","site_id","upload_id","id")
);
--> statement-breakpoint
ALTER TABLE "refused_row" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "upload" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "upload_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"status" "upload_status" NOT NULL,
	"file_name" text NOT NULL,
	"byte_size" bigint DEFAULT 0 NOT NULL,
	"sha256" text,
	"plan_given" jsonb,
	"plan" jsonb,
	"received_at" timestamp with time zone NOT NULL,
	"received_by" integer,
	"received_key" integer,
	"progress_rows" bigint DEFAULT 0 NOT NULL,
	"progress_bytes" bigint DEFAULT 0 NOT NULL,
	"account" jsonb,
	"error" jsonb,
	"latest_at" timestamp with time zone,
	"attempts" integer DEFAULT 0 NOT NULL,
	"stop_requested_at" timestamp with time zone,
	"withdraw_requested_at" timestamp with time zone,
	"finished_at" timestamp with time zone,
	CONSTRAINT "upload_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "upload" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "upload_area" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"upload_id" integer NOT NULL,
	"area_id" integer NOT NULL,
	"rows" integer NOT NULL,
	"first_at" timestamp with time zone NOT NULL,
	"latest_at" timestamp with time zone NOT NULL,
	"speaks_until" timestamp with time zone NOT NULL,
	"has_quantities" boolean NOT NULL,
	"has_starts" boolean NOT NULL,
	CONSTRAINT "upload_area_organisation_id_site_id_upload_id_area_id_pk" PRIMARY KEY("organisation_id","site_id","upload_id","area_id")
);
--> statement-breakpoint
ALTER TABLE "upload_area" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "upload_chunk" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"upload_id" integer NOT NULL,
	"number" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "upload_chunk_organisation_id_site_id_upload_id_number_pk" PRIMARY KEY("organisation_id","site_id","upload_id","number")
);
--> statement-breakpoint
ALTER TABLE "upload_chunk" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "upload_row" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"job_key" text collate "C" NOT NULL,
	"upload_id" integer NOT NULL,
	"line" integer NOT NULL,
	"part" smallint DEFAULT 0 NOT NULL,
	"area_id" integer NOT NULL,
	"arrived" timestamp with time zone,
	"started" timestamp with time zone,
	"finished" timestamp with time zone,
	"event" text,
	"record_key" text collate "C",
	"quantity" numeric,
	"family" text,
	"due" timestamp with time zone,
	"priority" text,
	"work_content" numeric,
	"value" numeric,
	"resource" text,
	"status" text,
	"parent" text,
	CONSTRAINT "upload_row_organisation_id_site_id_job_key_upload_id_line_part_pk" PRIMARY KEY("organisation_id","site_id","job_key","upload_id","line","part")
);
--> statement-breakpoint
ALTER TABLE "upload_row" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "area" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer NOT NULL,
	"position" integer NOT NULL,
	"origin" "spelling_origin" NOT NULL,
	CONSTRAINT "area_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "area" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "area_spelling" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"folded" text NOT NULL,
	"as_written" text NOT NULL,
	"area_id" integer NOT NULL,
	"origin" "spelling_origin" NOT NULL,
	CONSTRAINT "area_spelling_organisation_id_site_id_folded_pk" PRIMARY KEY("organisation_id","site_id","folded")
);
--> statement-breakpoint
ALTER TABLE "area_spelling" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "cap" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "cap_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"zone_id" integer NOT NULL,
	"limit" numeric,
	"unit" "figure_unit" NOT NULL,
	"valid_from" timestamp with time zone NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"declared_by" integer,
	"declared_at" timestamp with time zone NOT NULL,
	CONSTRAINT "cap_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "cap" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "zone" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "zone_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"kind" "zone_kind" NOT NULL,
	"name" text NOT NULL,
	"counts_from" "counts_from" DEFAULT 'arrival' NOT NULL,
	"state" "zone_state" DEFAULT 'ready' NOT NULL,
	"data_until" timestamp with time zone,
	"data_from" timestamp with time zone,
	"warm_until" timestamp with time zone,
	"has_starts" boolean DEFAULT false NOT NULL,
	"has_quantities" boolean DEFAULT false NOT NULL,
	CONSTRAINT "zone_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "zone" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "zone_area" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"area_id" integer NOT NULL,
	CONSTRAINT "zone_area_organisation_id_site_id_zone_id_area_id_pk" PRIMARY KEY("organisation_id","site_id","zone_id","area_id")
);
--> statement-breakpoint
ALTER TABLE "zone_area" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "zone_fact" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"zone_id" integer NOT NULL,
	"kind" "zone_fact_kind" NOT NULL,
	"valid_from" timestamp with time zone NOT NULL,
	"amount" numeric,
	"person_id" integer,
	CONSTRAINT "zone_fact_organisation_id_site_id_zone_id_kind_valid_from_pk" PRIMARY KEY("organisation_id","site_id","zone_id","kind","valid_from")
);
--> statement-breakpoint
ALTER TABLE "zone_fact" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "flow_day" ADD CONSTRAINT "flow_day_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flow_month" ADD CONSTRAINT "flow_month_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "level_day" ADD CONSTRAINT "level_day_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "level_hour" ADD CONSTRAINT "level_hour_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "access_key" ADD CONSTRAINT "access_key_organisation_id_organisation_id_fk" FOREIGN KEY ("organisation_id") REFERENCES "public"."organisation"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "access_key" ADD CONSTRAINT "access_key_created_by_person_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "membership" ADD CONSTRAINT "membership_organisation_id_organisation_id_fk" FOREIGN KEY ("organisation_id") REFERENCES "public"."organisation"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "membership" ADD CONSTRAINT "membership_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session" ADD CONSTRAINT "session_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "closure" ADD CONSTRAINT "closure_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "shift" ADD CONSTRAINT "shift_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site" ADD CONSTRAINT "site_id_site_directory_site_id_fk" FOREIGN KEY ("id") REFERENCES "public"."site_directory"("site_id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site_directory" ADD CONSTRAINT "site_directory_organisation_id_organisation_id_fk" FOREIGN KEY ("organisation_id") REFERENCES "public"."organisation"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "column_plan" ADD CONSTRAINT "column_plan_saved_by_person_id_fk" FOREIGN KEY ("saved_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "column_plan" ADD CONSTRAINT "column_plan_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "refused_row" ADD CONSTRAINT "refused_row_organisation_id_site_id_upload_id_upload_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","upload_id") REFERENCES "public"."upload"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_received_by_person_id_fk" FOREIGN KEY ("received_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_received_key_access_key_id_fk" FOREIGN KEY ("received_key") REFERENCES "public"."access_key"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload" ADD CONSTRAINT "upload_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload_area" ADD CONSTRAINT "upload_area_organisation_id_site_id_upload_id_upload_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","upload_id") REFERENCES "public"."upload"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "upload_chunk" ADD CONSTRAINT "upload_chunk_organisation_id_site_id_upload_id_upload_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","upload_id") REFERENCES "public"."upload"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "area" ADD CONSTRAINT "area_organisation_id_site_id_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "area_spelling" ADD CONSTRAINT "area_spelling_organisation_id_site_id_area_id_area_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","area_id") REFERENCES "public"."area"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cap" ADD CONSTRAINT "cap_declared_by_person_id_fk" FOREIGN KEY ("declared_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "cap" ADD CONSTRAINT "cap_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone" ADD CONSTRAINT "zone_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone_area" ADD CONSTRAINT "zone_area_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone_area" ADD CONSTRAINT "zone_area_organisation_id_site_id_area_id_area_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","area_id") REFERENCES "public"."area"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone_fact" ADD CONSTRAINT "zone_fact_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "zone_fact" ADD CONSTRAINT "zone_fact_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "audit_entry_by_time" ON "audit_entry" USING btree ("organisation_id","at");--> statement-breakpoint
CREATE INDEX "membership_of_person" ON "membership" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "session_of_person" ON "session" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "upload_waiting" ON "upload" USING btree ("site_id") WHERE status in ('waiting', 'reading', 'loading') or (withdraw_requested_at is not null and status <> 'withdrawn');--> statement-breakpoint
CREATE INDEX "upload_row_of_upload" ON "upload_row" USING brin ("site_id","upload_id");--> statement-breakpoint
CREATE INDEX "upload_row_by_record_key" ON "upload_row" USING btree ("organisation_id","site_id","record_key") WHERE record_key is not null;--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "audit_entry" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "flow_day" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "flow_month" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "level_day" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "level_hour" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "record" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "stay" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "closure" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "shift" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "site" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "column_plan" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "refused_row" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "upload" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "upload_area" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "upload_chunk" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "upload_row" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "area" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "area_spelling" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "cap" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "zone" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "zone_area" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "zone_fact" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));