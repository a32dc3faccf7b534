ALTER TABLE "recordings" ALTER COLUMN "device_id" DROP NOT NULL;--> statement-breakpoint
ALTER TABLE "recordings" ADD COLUMN "decimals" jsonb;