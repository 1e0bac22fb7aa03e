CREATE TABLE "area_move" (
	"organisation_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"id" integer GENERATED ALWAYS AS IDENTITY (sequence name "area_move_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"area_id" integer NOT NULL,
	"target_area_id" integer NOT NULL,
	"valid_from" timestamp with time zone,
	"moved_by" integer,
	"moved_at" timestamp with time zone NOT NULL,
	CONSTRAINT "area_move_organisation_id_site_id_id_pk" PRIMARY KEY("organisation_id","site_id","id"),
	CONSTRAINT "area_move_once" UNIQUE NULLS NOT DISTINCT("organisation_id","site_id","area_id","valid_from")
);
--> statement-breakpoint
ALTER TABLE "area_move" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "record" ADD COLUMN "ending" text;--> statement-breakpoint
ALTER TABLE "stay" ADD COLUMN "ending" text;--> statement-breakpoint
ALTER TABLE "upload" ADD COLUMN "file_kind" text;--> statement-breakpoint
ALTER TABLE "upload_area" ADD COLUMN "replaces_from" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "upload_area" ADD COLUMN "replaces_until" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "upload_row" ADD COLUMN "second_reading" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "upload_row" ADD COLUMN "ending" text;--> statement-breakpoint
ALTER TABLE "area_move" ADD CONSTRAINT "area_move_moved_by_person_id_fk" FOREIGN KEY ("moved_by") REFERENCES "public"."person"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "area_move" ADD CONSTRAINT "area_move_from" FOREIGN KEY ("organisation_id","site_id","area_id") REFERENCES "public"."area"("organisation_id","site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "area_move" ADD CONSTRAINT "area_move_to" FOREIGN KEY ("organisation_id","site_id","target_area_id") REFERENCES "public"."area"("organisation_id","site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE POLICY "of_the_organisation" ON "area_move" AS PERMISSIVE FOR ALL TO public USING (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer)) WITH CHECK (organisation_id = (select nullif(current_setting('weirmark.organisation_id', true), '')::integer));