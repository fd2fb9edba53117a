CREATE TYPE "public"."role" AS ENUM('viewer', 'editor', 'owner');--> statement-breakpoint
CREATE TYPE "public"."run_state" AS ENUM('queued', 'running', 'done', 'failed', 'cancelled');--> statement-breakpoint
CREATE TABLE "sessions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"token_hash" text NOT NULL,
	"user_id" uuid NOT NULL,
	"user_agent" text DEFAULT '' NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"last_seen_at" timestamp with time zone DEFAULT now() NOT NULL,
	"confirmed_at" timestamp with time zone DEFAULT now() NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	CONSTRAINT "sessions_token_hash_unique" UNIQUE("token_hash")
);
--> statement-breakpoint
CREATE TABLE "sign_in_failures" (
	"key" text PRIMARY KEY NOT NULL,
	"failures" integer DEFAULT 0 NOT NULL,
	"window_started_at" timestamp with time zone DEFAULT now() NOT NULL,
	"blocked_until" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "users" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"email" text NOT NULL,
	"name" text NOT NULL,
	"password_hash" text NOT NULL,
	"is_demo" boolean DEFAULT false NOT NULL,
	"is_administrator" boolean DEFAULT false NOT NULL,
	"disabled_at" timestamp with time zone,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "users_email_unique" UNIQUE("email")
);
--> statement-breakpoint
CREATE TABLE "groups" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"is_demo" boolean DEFAULT false NOT NULL,
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "memberships" (
	"group_id" uuid NOT NULL,
	"user_id" uuid NOT NULL,
	"role" "role" NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "memberships_group_id_user_id_pk" PRIMARY KEY("group_id","user_id")
);
--> statement-breakpoint
CREATE TABLE "parameter_set_versions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"set_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"parameters" jsonb NOT NULL,
	"content_hash" text NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "parameter_set_versions_set_version" UNIQUE("set_id","version")
);
--> statement-breakpoint
ALTER TABLE "parameter_set_versions" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "parameter_sets" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"name" text NOT NULL,
	"latest_version" integer DEFAULT 1 NOT NULL,
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	"updated_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "parameter_sets_group_name" UNIQUE("group_id","name")
);
--> statement-breakpoint
ALTER TABLE "parameter_sets" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "result_arrays" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"result_id" uuid NOT NULL,
	"key" text NOT NULL,
	"data_type" text NOT NULL,
	"shape" integer[] NOT NULL,
	"unit" text NOT NULL,
	"sha256" text NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "result_arrays_result_key" UNIQUE("result_id","key")
);
--> statement-breakpoint
ALTER TABLE "result_arrays" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "results" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"input_hash" text NOT NULL,
	"engine_version" text NOT NULL,
	"summary" jsonb NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "results_group_input" UNIQUE("group_id","input_hash")
);
--> statement-breakpoint
ALTER TABLE "results" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "run_attempts" (
	"run_id" uuid PRIMARY KEY NOT NULL,
	"group_id" uuid NOT NULL,
	"job_id" text NOT NULL,
	"attempt" integer NOT NULL,
	"worker_id" text NOT NULL,
	"started_at" timestamp with time zone DEFAULT now() NOT NULL,
	"heartbeat_at" timestamp with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "runs" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"set_version_id" uuid NOT NULL,
	"input_hash" text NOT NULL,
	"engine_version" text NOT NULL,
	"state" "run_state" DEFAULT 'queued' NOT NULL,
	"progress" double precision DEFAULT 0 NOT NULL,
	"seconds_left" double precision,
	"attempt" integer DEFAULT 0 NOT NULL,
	"cancel_requested" boolean DEFAULT false NOT NULL,
	"failure" jsonb,
	"result_id" uuid,
	"requested_by" uuid NOT NULL,
	"queued_at" timestamp with time zone DEFAULT now() NOT NULL,
	"started_at" timestamp with time zone,
	"finished_at" timestamp with time zone,
	"compute_ms" double precision
);
--> statement-breakpoint
ALTER TABLE "runs" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "files" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"storage_key" text NOT NULL,
	"name" text NOT NULL,
	"byte_length" integer NOT NULL,
	"sha256" text NOT NULL,
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "files_storage_key_unique" UNIQUE("storage_key")
);
--> statement-breakpoint
ALTER TABLE "files" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
CREATE TABLE "measurements" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"group_id" uuid NOT NULL,
	"file_id" uuid NOT NULL,
	"name" text NOT NULL,
	"kind" text NOT NULL,
	"sample_name" text DEFAULT '' NOT NULL,
	"temperature_k" double precision,
	"is_invented" boolean DEFAULT false NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"reading" jsonb NOT NULL,
	"point_count" integer NOT NULL,
	"energies_mev" "bytea" NOT NULL,
	"values" "bytea" NOT NULL,
	"uncertainties" "bytea",
	"created_by" uuid NOT NULL,
	"created_at" timestamp with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "measurements_group_name" UNIQUE("group_id","name")
);
--> statement-breakpoint
ALTER TABLE "measurements" ENABLE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "groups" ADD CONSTRAINT "groups_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "memberships" ADD CONSTRAINT "memberships_user_id_users_id_fk" FOREIGN KEY ("user_id") REFERENCES "public"."users"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parameter_set_versions" ADD CONSTRAINT "parameter_set_versions_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parameter_set_versions" ADD CONSTRAINT "parameter_set_versions_set_id_parameter_sets_id_fk" FOREIGN KEY ("set_id") REFERENCES "public"."parameter_sets"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parameter_set_versions" ADD CONSTRAINT "parameter_set_versions_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parameter_sets" ADD CONSTRAINT "parameter_sets_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "parameter_sets" ADD CONSTRAINT "parameter_sets_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "result_arrays" ADD CONSTRAINT "result_arrays_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "result_arrays" ADD CONSTRAINT "result_arrays_result_id_results_id_fk" FOREIGN KEY ("result_id") REFERENCES "public"."results"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "results" ADD CONSTRAINT "results_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_set_version_id_parameter_set_versions_id_fk" FOREIGN KEY ("set_version_id") REFERENCES "public"."parameter_set_versions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_result_id_results_id_fk" FOREIGN KEY ("result_id") REFERENCES "public"."results"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_requested_by_users_id_fk" FOREIGN KEY ("requested_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "measurements" ADD CONSTRAINT "measurements_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "measurements" ADD CONSTRAINT "measurements_file_id_files_id_fk" FOREIGN KEY ("file_id") REFERENCES "public"."files"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "measurements" ADD CONSTRAINT "measurements_created_by_users_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."users"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "sessions_user_id_index" ON "sessions" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "memberships_user_id_index" ON "memberships" USING btree ("user_id");--> statement-breakpoint
CREATE INDEX "parameter_set_versions_hash_index" ON "parameter_set_versions" USING btree ("group_id","content_hash");--> statement-breakpoint
CREATE INDEX "parameter_sets_group_updated_index" ON "parameter_sets" USING btree ("group_id","updated_at");--> statement-breakpoint
CREATE INDEX "runs_group_queued_index" ON "runs" USING btree ("group_id","queued_at");--> statement-breakpoint
CREATE INDEX "runs_set_version_index" ON "runs" USING btree ("set_version_id");--> statement-breakpoint
CREATE INDEX "files_group_index" ON "files" USING btree ("group_id");--> statement-breakpoint
CREATE INDEX "measurements_group_created_index" ON "measurements" USING btree ("group_id","created_at");--> statement-breakpoint
CREATE POLICY "parameter_set_versions_of_group" ON "parameter_set_versions" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "parameter_sets_of_group" ON "parameter_sets" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "result_arrays_of_group" ON "result_arrays" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "results_of_group" ON "results" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "runs_of_group" ON "runs" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "files_of_group" ON "files" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);--> statement-breakpoint
CREATE POLICY "measurements_of_group" ON "measurements" AS PERMISSIVE FOR ALL TO public USING (group_id = nullif(current_setting('app.group_id', true), '')::uuid) WITH CHECK (group_id = nullif(current_setting('app.group_id', true), '')::uuid);