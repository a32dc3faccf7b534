CREATE TABLE "accounts" (
	"id" text PRIMARY KEY NOT NULL,
	"account_id" text NOT NULL,
	"provider_id" text NOT NULL,
	"user_id" text NOT NULL,
	"access_token" text,
	"refresh_token" text,
	"id_token" text,
	"access_token_expires_at" timestamp with time zone,
	"refresh_token_expires_at" timestamp with time zone,
	"scope" text,
	"password" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "people" (
	"id" text PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"email" text NOT NULL,
	"email_verified" boolean DEFAULT false NOT NULL,
	"image" text,
	"role" text DEFAULT 'operator' NOT NULL,
	"closed" boolean DEFAULT false NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "people_email_unique" UNIQUE("email")
);
--> statement-breakpoint
CREATE TABLE "sign_ins" (
	"id" text PRIMARY KEY NOT NULL,
	"token" text NOT NULL,
	"user_id" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"ip_address" text,
	"user_agent" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "sign_ins_token_unique" UNIQUE("token")
);
--> statement-breakpoint
CREATE TABLE "verifications" (
	"id" text PRIMARY KEY NOT NULL,
	"identifier" text NOT NULL,
	"value" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "devices" (
	"id" uuid PRIMARY KEY NOT NULL,
	"name" text NOT NULL,
	"rig_id" uuid NOT NULL,
	"key_hash" text NOT NULL,
	"key_hint" text NOT NULL,
	"faults" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"clock" jsonb,
	"last_seen_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"revoked_at" timestamp with time zone,
	CONSTRAINT "devices_key_hash_unique" UNIQUE("key_hash")
);
--> statement-breakpoint
CREATE TABLE "rig_revisions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"rig_id" uuid NOT NULL,
	"revision" integer NOT NULL,
	"title" text NOT NULL,
	"remark" text DEFAULT '' NOT NULL,
	"file" jsonb NOT NULL,
	"digest" text NOT NULL,
	"imported_by" text,
	"imported_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "rig_revisions_number" UNIQUE("rig_id","revision")
);
--> statement-breakpoint
CREATE TABLE "rigs" (
	"id" uuid PRIMARY KEY NOT NULL,
	"code" text NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "rigs_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "conditions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"place" integer NOT NULL,
	"blind_code" text NOT NULL,
	"label" text NOT NULL,
	CONSTRAINT "conditions_code" UNIQUE("study_id","blind_code")
);
--> statement-breakpoint
CREATE TABLE "members" (
	"study_id" uuid NOT NULL,
	"person_id" text NOT NULL,
	"role" text NOT NULL,
	"blind" boolean DEFAULT false NOT NULL,
	"since" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "members_study_id_person_id_pk" PRIMARY KEY("study_id","person_id")
);
--> statement-breakpoint
CREATE TABLE "participants" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"code" text NOT NULL,
	"hand" text DEFAULT 'right' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "participants_code" UNIQUE("study_id","code")
);
--> statement-breakpoint
CREATE TABLE "studies" (
	"id" uuid PRIMARY KEY NOT NULL,
	"code" text NOT NULL,
	"title" text NOT NULL,
	"protocol" text DEFAULT '' NOT NULL,
	"state" text DEFAULT 'draft' NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "studies_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "tasks" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"place" integer NOT NULL,
	"code" text NOT NULL,
	"title" text NOT NULL,
	"time_limit_s" double precision,
	CONSTRAINT "tasks_code" UNIQUE("study_id","code")
);
--> statement-breakpoint
CREATE TABLE "log_entries" (
	"session_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"who" text NOT NULL,
	"what" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"hash" text NOT NULL,
	CONSTRAINT "log_entries_session_id_n_pk" PRIMARY KEY("session_id","n")
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"participant_id" uuid NOT NULL,
	"rig_revision_id" uuid NOT NULL,
	"visit" integer NOT NULL,
	"state" text DEFAULT 'planned' NOT NULL,
	"planned_at" timestamp with time zone NOT NULL,
	"created_by" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "sessions_visit" UNIQUE("participant_id","visit")
);
--> statement-breakpoint
CREATE TABLE "trials" (
	"id" uuid PRIMARY KEY NOT NULL,
	"session_id" uuid NOT NULL,
	"number" integer NOT NULL,
	"task_id" uuid NOT NULL,
	"condition_id" uuid NOT NULL,
	"state" text DEFAULT 'planned' NOT NULL,
	"device_id" uuid,
	"outcome" text,
	"outcome_reason" text,
	"judged_by" text,
	"judged_at" timestamp with time zone,
	"removed_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "trials_number" UNIQUE("session_id","number")
);
--> statement-breakpoint
CREATE TABLE "recording_chunks" (
	"recording_id" uuid NOT NULL,
	"n" integer NOT NULL,
	"first" integer NOT NULL,
	"count" integer NOT NULL,
	"t0_us" double precision NOT NULL,
	"t1_us" double precision NOT NULL,
	"data" "bytea" NOT NULL,
	CONSTRAINT "recording_chunks_recording_id_n_pk" PRIMARY KEY("recording_id","n")
);
--> statement-breakpoint
CREATE TABLE "recording_pyramid" (
	"recording_id" uuid NOT NULL,
	"level" integer NOT NULL,
	"n" integer NOT NULL,
	"t0_us" double precision NOT NULL,
	"t1_us" double precision NOT NULL,
	"data" "bytea" NOT NULL,
	CONSTRAINT "recording_pyramid_recording_id_level_n_pk" PRIMARY KEY("recording_id","level","n")
);
--> statement-breakpoint
CREATE TABLE "recording_tail" (
	"recording_id" uuid NOT NULL,
	"batch" integer NOT NULL,
	"batches" integer NOT NULL,
	"data" "bytea" NOT NULL,
	CONSTRAINT "recording_tail_recording_id_batch_pk" PRIMARY KEY("recording_id","batch")
);
--> statement-breakpoint
CREATE TABLE "recordings" (
	"id" uuid PRIMARY KEY NOT NULL,
	"device_id" uuid NOT NULL,
	"run" text NOT NULL,
	"trial_id" uuid,
	"rig_revision_id" uuid NOT NULL,
	"state" text DEFAULT 'growing' NOT NULL,
	"rate_hz" double precision NOT NULL,
	"channels" jsonb NOT NULL,
	"firmware" text DEFAULT '' NOT NULL,
	"start_us" bigint NOT NULL,
	"next_batch" integer DEFAULT 0 NOT NULL,
	"samples" integer DEFAULT 0 NOT NULL,
	"next_sample" integer DEFAULT 0 NOT NULL,
	"last_us" double precision DEFAULT 0 NOT NULL,
	"gaps" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"marks" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"started_at" timestamp with time zone NOT NULL,
	"start_uncertainty_us" double precision,
	"end_reason" text,
	"digest" text,
	"statistics" jsonb,
	"closed_at" timestamp with time zone,
	"flags_found_at" timestamp with time zone,
	CONSTRAINT "recordings_run" UNIQUE("device_id","run")
);
--> statement-breakpoint
CREATE TABLE "flags" (
	"id" uuid PRIMARY KEY NOT NULL,
	"recording_id" uuid NOT NULL,
	"rule_revision_id" uuid,
	"kind" text NOT NULL,
	"cable" integer,
	"start_s" double precision NOT NULL,
	"end_s" double precision NOT NULL,
	"peak" double precision
);
--> statement-breakpoint
CREATE TABLE "rule_revisions" (
	"id" uuid PRIMARY KEY NOT NULL,
	"study_id" uuid NOT NULL,
	"revision" integer NOT NULL,
	"rules" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "rule_revisions_number" UNIQUE("study_id","revision")
);
--> statement-breakpoint
CREATE TABLE "note_versions" (
	"note_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"text" text NOT NULL,
	"author_id" text NOT NULL,
	"at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "note_versions_note_id_version_pk" PRIMARY KEY("note_id","version")
);
--> statement-breakpoint
CREATE TABLE "notes" (
	"id" uuid PRIMARY KEY NOT NULL,
	"trial_id" uuid NOT NULL,
	"reply_to" uuid,
	"author_id" text NOT NULL,
	"client_key" uuid NOT NULL,
	"start_s" double precision NOT NULL,
	"end_s" double precision,
	"cables" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	"resolved_by" text,
	"resolved_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "notes_client_key" UNIQUE("author_id","client_key")
);
--> statement-breakpoint
CREATE TABLE "audit_entries" (
	"id" bigserial PRIMARY KEY NOT NULL,
	"at" timestamp with time zone DEFAULT now() NOT NULL,
	"actor" text NOT NULL,
	"who" text NOT NULL,
	"action" text NOT NULL,
	"subject" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mail" (
	"id" uuid PRIMARY KEY NOT NULL,
	"recipient" text NOT NULL,
	"subject" text NOT NULL,
	"text" text NOT NULL,
	"html" text NOT NULL,
	"state" text NOT NULL,
	"failure" text,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "settings" (
	"key" text PRIMARY KEY NOT NULL,
	"value" jsonb NOT NULL
);
--> statement-breakpoint
ALTER TABLE "accounts" ADD CONSTRAINT "accounts_user_id_people_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sign_ins" ADD CONSTRAINT "sign_ins_user_id_people_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."people"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "devices" ADD CONSTRAINT "devices_rig_id_rigs_id_fk" FOREIGN KEY ("rig_id") REFERENCES "public"."rigs"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rig_revisions" ADD CONSTRAINT "rig_revisions_rig_id_rigs_id_fk" FOREIGN KEY ("rig_id") REFERENCES "public"."rigs"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rig_revisions" ADD CONSTRAINT "rig_revisions_imported_by_people_id_fk" FOREIGN KEY ("imported_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "conditions" ADD CONSTRAINT "conditions_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "members" ADD CONSTRAINT "members_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "members" ADD CONSTRAINT "members_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "participants" ADD CONSTRAINT "participants_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "studies" ADD CONSTRAINT "studies_created_by_people_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tasks" ADD CONSTRAINT "tasks_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "log_entries" ADD CONSTRAINT "log_entries_session_id_sessions_id_fk" FOREIGN KEY ("session_id") REFERENCES "public"."sessions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_participant_id_participants_id_fk" FOREIGN KEY ("participant_id") REFERENCES "public"."participants"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_rig_revision_id_rig_revisions_id_fk" FOREIGN KEY ("rig_revision_id") REFERENCES "public"."rig_revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_created_by_people_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trials" ADD CONSTRAINT "trials_session_id_sessions_id_fk" FOREIGN KEY ("session_id") REFERENCES "public"."sessions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trials" ADD CONSTRAINT "trials_task_id_tasks_id_fk" FOREIGN KEY ("task_id") REFERENCES "public"."tasks"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trials" ADD CONSTRAINT "trials_condition_id_conditions_id_fk" FOREIGN KEY ("condition_id") REFERENCES "public"."conditions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trials" ADD CONSTRAINT "trials_device_id_devices_id_fk" FOREIGN KEY ("device_id") REFERENCES "public"."devices"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "trials" ADD CONSTRAINT "trials_judged_by_people_id_fk" FOREIGN KEY ("judged_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording_chunks" ADD CONSTRAINT "recording_chunks_recording_id_recordings_id_fk" FOREIGN KEY ("recording_id") REFERENCES "public"."recordings"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording_pyramid" ADD CONSTRAINT "recording_pyramid_recording_id_recordings_id_fk" FOREIGN KEY ("recording_id") REFERENCES "public"."recordings"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recording_tail" ADD CONSTRAINT "recording_tail_recording_id_recordings_id_fk" FOREIGN KEY ("recording_id") REFERENCES "public"."recordings"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recordings" ADD CONSTRAINT "recordings_device_id_devices_id_fk" FOREIGN KEY ("device_id") REFERENCES "public"."devices"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recordings" ADD CONSTRAINT "recordings_trial_id_trials_id_fk" FOREIGN KEY ("trial_id") REFERENCES "public"."trials"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "recordings" ADD CONSTRAINT "recordings_rig_revision_id_rig_revisions_id_fk" FOREIGN KEY ("rig_revision_id") REFERENCES "public"."rig_revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_recording_id_recordings_id_fk" FOREIGN KEY ("recording_id") REFERENCES "public"."recordings"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "flags" ADD CONSTRAINT "flags_rule_revision_id_rule_revisions_id_fk" FOREIGN KEY ("rule_revision_id") REFERENCES "public"."rule_revisions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "rule_revisions" ADD CONSTRAINT "rule_revisions_study_id_studies_id_fk" FOREIGN KEY ("study_id") REFERENCES "public"."studies"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "note_versions" ADD CONSTRAINT "note_versions_note_id_notes_id_fk" FOREIGN KEY ("note_id") REFERENCES "public"."notes"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "note_versions" ADD CONSTRAINT "note_versions_author_id_people_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notes" ADD CONSTRAINT "notes_trial_id_trials_id_fk" FOREIGN KEY ("trial_id") REFERENCES "public"."trials"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notes" ADD CONSTRAINT "notes_reply_to_notes_id_fk" FOREIGN KEY ("reply_to") REFERENCES "public"."notes"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notes" ADD CONSTRAINT "notes_author_id_people_id_fk" FOREIGN KEY ("author_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notes" ADD CONSTRAINT "notes_resolved_by_people_id_fk" FOREIGN KEY ("resolved_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "accounts_user" ON "accounts" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "sign_ins_user" ON "sign_ins" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "verifications_identifier" ON "verifications" USING btree ("identifier");--> statement-breakpoint
CREATE INDEX "sessions_study" ON "sessions" USING btree ("study_id","planned_at");--> statement-breakpoint
CREATE INDEX "sessions_planned" ON "sessions" USING btree ("planned_at");--> statement-breakpoint
CREATE INDEX "recordings_trial" ON "recordings" USING btree ("trial_id");--> statement-breakpoint
CREATE INDEX "flags_recording" ON "flags" USING btree ("recording_id","start_s");--> statement-breakpoint
CREATE INDEX "notes_trial" ON "notes" USING btree ("trial_id","start_s");--> statement-breakpoint
CREATE INDEX "audit_at" ON "audit_entries" USING btree ("at");