-- Row level security is enabled by the tables' policies; FORCE makes their owner obey it too.
ALTER TABLE "parameter_sets" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "parameter_set_versions" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "runs" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "results" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "result_arrays" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "files" FORCE ROW LEVEL SECURITY;--> statement-breakpoint
ALTER TABLE "measurements" FORCE ROW LEVEL SECURITY;
