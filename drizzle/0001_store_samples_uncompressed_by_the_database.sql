-- Samples arrive compressed: a second compression by the database costs two to three times the throughput and gains nothing.
ALTER TABLE "recording_chunks" ALTER COLUMN "data" SET STORAGE EXTERNAL;--> statement-breakpoint
ALTER TABLE "recording_tail" ALTER COLUMN "data" SET STORAGE EXTERNAL;--> statement-breakpoint
ALTER TABLE "recording_pyramid" ALTER COLUMN "data" SET STORAGE EXTERNAL;
