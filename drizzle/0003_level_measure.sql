ALTER TABLE "level_day" ALTER COLUMN "measure" SET DATA TYPE text collate "C";--> statement-breakpoint
ALTER TABLE "level_hour" ALTER COLUMN "measure" SET DATA TYPE text collate "C";--> statement-breakpoint
ALTER TABLE "level_day" ADD CONSTRAINT "level_day_measure" CHECK ("level_day"."measure" in ('inside_jobs', 'in_process_jobs', 'inside_units', 'in_process_units'));--> statement-breakpoint
ALTER TABLE "level_hour" ADD CONSTRAINT "level_hour_measure" CHECK ("level_hour"."measure" in ('inside_jobs', 'in_process_jobs', 'inside_units', 'in_process_units'));--> statement-breakpoint
DROP TYPE "public"."level_measure";