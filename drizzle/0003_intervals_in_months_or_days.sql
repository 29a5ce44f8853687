ALTER TABLE "soft_sensors" DROP COLUMN "recalibration_months";--> statement-breakpoint
ALTER TABLE "soft_sensors" DROP COLUMN "review_months";