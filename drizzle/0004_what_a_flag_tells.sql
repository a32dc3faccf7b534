ALTER TABLE "flags" ADD COLUMN "peak_s" double precision;--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "severity" text;--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "evidence" jsonb;--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "cause" jsonb;--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "removed_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "flags" ADD COLUMN "removed_by_rule_revision_id" uuid;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_removed_by_rule_revision_id_rule_revisions_id_fk" FOREIGN KEY ("removed_by_rule_revision_id") REFERENCES "public"."rule_revisions"("id") ON DELETE no action ON UPDATE no action;