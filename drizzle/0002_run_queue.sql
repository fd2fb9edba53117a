CREATE TABLE "queue_turns" (
	"group_id" uuid PRIMARY KEY NOT NULL,
	"queued_turn" integer NOT NULL,
	"served_turn" integer DEFAULT 0 NOT NULL
);
--> statement-breakpoint
ALTER TABLE "runs" ADD COLUMN "losses" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "runs" ADD COLUMN "job_id" uuid;--> statement-breakpoint
ALTER TABLE "runs" ADD COLUMN "changed_at" timestamp with time zone DEFAULT now() NOT NULL;--> statement-breakpoint
ALTER TABLE "queue_turns" ADD CONSTRAINT "queue_turns_group_id_groups_id_fk" FOREIGN KEY ("group_id") REFERENCES "public"."groups"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "runs_group_changed_index" ON "runs" USING btree ("group_id","changed_at");--> statement-breakpoint
CREATE INDEX "runs_group_unfinished_index" ON "runs" USING btree ("group_id","input_hash") WHERE "runs"."state" in ('queued', 'running');