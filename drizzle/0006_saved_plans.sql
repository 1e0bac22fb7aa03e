ALTER TABLE "access_key" ADD COLUMN "expires_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "access_key" ADD COLUMN "last_used_at" timestamp with time zone;--> statement-breakpoint
CREATE UNIQUE INDEX "column_plan_name_once" ON "column_plan" USING btree ("organisation_id","site_id",lower("name")) WHERE "column_plan"."retired_on" is null;