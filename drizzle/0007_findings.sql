CREATE TYPE "public"."finding_kind" AS ENUM('rising', 'falling', 'cap-exceeded', 'held-undeclared', 'lost-finishes', 'stale-jobs', 'count-mismatch');--> statement-breakpoint
CREATE TYPE "public"."finding_status" AS ENUM('open', 'taken-up', 'explained', 'closed');--> statement-breakpoint
CREATE TYPE "public"."plant_event_kind" AS ENUM('holiday', 'stocktake', 'ramp-up', 'breakdown', 'other');--> statement-breakpoint
CREATE TABLE "finding" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "finding_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"kind" "finding_kind" NOT NULL,
	"zone_id" integer,
	"area_ids" integer[] NOT NULL,
	"status" "finding_status" DEFAULT 'open' NOT NULL,
	"is_present" boolean DEFAULT true NOT NULL,
	"assignee_id" integer,
	"onset" timestamp with time zone NOT NULL,
	"seen_until" timestamp with time zone NOT NULL,
	"trend" jsonb,
	"evidence" jsonb NOT NULL,
	"found_at" timestamp with time zone NOT NULL,
	"changed_at" timestamp with time zone NOT NULL,
	CONSTRAINT "finding_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "finding" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "finding_act" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"finding_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "finding_act_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"at" timestamp with time zone NOT NULL,
	"person_id" integer,
	"act" text NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	CONSTRAINT "finding_act_organisation_id_site_id_finding_id_id_pk" PRIMARY KEY("organisation_id","site_id","finding_id","id"),
	CONSTRAINT "finding_act_known" CHECK ("finding_act"."act" in ('found', 'ended', 'returned', 'taken-up', 'explained', 'closed', 'reopened', 'assigned', 'commented'))
);
--> statement-breakpoint
ALTER TABLE "finding_act" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "plant_event" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "plant_event_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"kind" "plant_event_kind" NOT NULL,
	"name" text NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"zone_id" integer,
	"leave_out" boolean NOT NULL,
	"entered_by" integer,
	"entered_at" timestamp with time zone NOT NULL,
	CONSTRAINT "plant_event_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "plant_event" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "write_off" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "write_off_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"job_key" text collate "C" NOT NULL,
	"area_id" integer NOT NULL,
	"as_of" timestamp with time zone NOT NULL,
	"reason" text NOT NULL,
	"made_by" integer,
	"made_at" timestamp with time zone NOT NULL,
	"applied_at" timestamp with time zone,
	"taken_back_at" timestamp with time zone,
	"taken_back_by" integer,
	CONSTRAINT "write_off_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id")
);
--> statement-breakpoint
ALTER TABLE "write_off" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "carrying_share" numeric;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "findings_requested_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "worthwhile_rise_share" numeric;--> statement-breakpoint
ALTER TABLE "site" ADD COLUMN "worthwhile_rise_jobs" numeric;--> statement-breakpoint
ALTER TABLE "zone" ADD COLUMN "progress" numeric DEFAULT '0' NOT NULL;--> statement-breakpoint
ALTER TABLE "finding" ADD CONSTRAINT "finding_assignee_id_person_id_fk" FOREIGN KEY ("assignee_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "finding" ADD CONSTRAINT "finding_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "finding" ADD CONSTRAINT "finding_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "finding_act" ADD CONSTRAINT "finding_act_person_id_person_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "finding_act" ADD CONSTRAINT "finding_act_organisation_id_site_id_finding_id_finding_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","finding_id") REFERENCES "public"."finding"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plant_event" ADD CONSTRAINT "plant_event_entered_by_person_id_fk" FOREIGN KEY ("entered_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plant_event" ADD CONSTRAINT "plant_event_organisation_id_site_id_site_organisation_id_id_fk" FOREIGN KEY ("organisation_id","site_id") REFERENCES "public"."site"("organisation_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "plant_event" ADD CONSTRAINT "plant_event_organisation_id_site_id_zone_id_zone_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","zone_id") REFERENCES "public"."zone"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "write_off" ADD CONSTRAINT "write_off_made_by_person_id_fk" FOREIGN KEY ("made_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "write_off" ADD CONSTRAINT "write_off_taken_back_by_person_id_fk" FOREIGN KEY ("taken_back_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "write_off" ADD CONSTRAINT "write_off_organisation_id_site_id_area_id_area_organisation_id_site_id_id_fk" FOREIGN KEY ("organisation_id","site_id","area_id") REFERENCES "public"."area"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "finding_by_zone" ON "finding" USING btree ("site_id","zone_id","kind");--> statement-breakpoint
CREATE INDEX "write_off_of_job" ON "write_off" USING btree ("site_id","job_key");--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "finding" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "finding_act" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "plant_event" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "write_off" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));