CREATE TABLE "import_profiles" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "import_profiles_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"name" text NOT NULL,
	"signature" text NOT NULL,
	"mapping" jsonb NOT NULL,
	"used_at" timestamp (3) with time zone NOT NULL,
	"uses" integer DEFAULT 0 NOT NULL,
	"created_by" integer NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "import_profiles_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "check_results" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "check_results_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"standard_id" integer NOT NULL,
	"measured_at" timestamp (3) with time zone NOT NULL,
	"analyst" text DEFAULT '' NOT NULL,
	"values" double precision[] NOT NULL,
	"recorded_by" integer NOT NULL,
	"recorded_at" timestamp (3) with time zone NOT NULL,
	"withdrawn_at" timestamp (3) with time zone,
	"withdrawn_reason" text,
	CONSTRAINT "check_results_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "check_results_some" CHECK (cardinality("check_results"."values") >= 1),
	CONSTRAINT "check_results_withdrawn" CHECK (("check_results"."withdrawn_at" is null) = ("check_results"."withdrawn_reason" is null))
);
--> statement-breakpoint
CREATE TABLE "check_standards" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "check_standards_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"method_id" integer NOT NULL,
	"name" text NOT NULL,
	"accepted_value" double precision NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "check_standards_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "retests" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "retests_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"sample_id" bigint NOT NULL,
	"asked_by" integer NOT NULL,
	"asked_at" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"answer" text,
	"answered_by" integer,
	"answered_at" timestamp (3) with time zone,
	"note" text DEFAULT '' NOT NULL,
	"result_sample_id" bigint,
	CONSTRAINT "retests_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "retests_answer" CHECK ("retests"."answer" in ('result', 'no-bottle', 'not-needed')),
	CONSTRAINT "retests_answered" CHECK (("retests"."answer" is null) = ("retests"."answered_at" is null))
);
--> statement-breakpoint
CREATE TABLE "sample_requests" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "sample_requests_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"sample_point_id" integer NOT NULL,
	"count" integer NOT NULL,
	"from_at" timestamp (3) with time zone NOT NULL,
	"until_at" timestamp (3) with time zone NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	"asked_by" integer NOT NULL,
	"asked_at" timestamp (3) with time zone NOT NULL,
	"withdrawn_at" timestamp (3) with time zone,
	"withdrawn_by" integer,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "sample_requests_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "sample_requests_count" CHECK ("sample_requests"."count" between 1 and 50),
	CONSTRAINT "sample_requests_span" CHECK ("sample_requests"."from_at" < "sample_requests"."until_at")
);
--> statement-breakpoint
CREATE TABLE "samples_not_taken" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "samples_not_taken_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"sample_point_id" integer NOT NULL,
	"asked_for" timestamp (3) with time zone NOT NULL,
	"reason" text NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"entry_key" uuid NOT NULL,
	"recorded_by" integer NOT NULL,
	"recorded_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "samples_not_taken_entry_key" UNIQUE("site_id","entry_key"),
	CONSTRAINT "samples_not_taken_reason" CHECK ("samples_not_taken"."reason" in ('unit-stopped', 'no-safe-access', 'bottle-lost', 'other')),
	CONSTRAINT "samples_not_taken_note" CHECK ("samples_not_taken"."reason" <> 'other' or "samples_not_taken"."note" <> '')
);
--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD COLUMN "sampling_plan" jsonb;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD COLUMN "profile_id" integer;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD COLUMN "mends" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD COLUMN "unknown_points" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "sample_points" ADD COLUMN "aliases" text[] DEFAULT '{}' NOT NULL;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "stated_unit" text;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "stated_value" double precision;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "replicates" double precision[];--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "composite_ms" integer;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "analyst" text;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "supersedes_id" bigint;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "change_reason" text;--> statement-breakpoint
ALTER TABLE "samples" ADD COLUMN "entry_key" uuid;--> statement-breakpoint
ALTER TABLE "sites" ADD COLUMN "shifts" jsonb DEFAULT '[{"name":"Early","from":"06:00"},{"name":"Late","from":"14:00"},{"name":"Night","from":"22:00"}]'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "import_profiles" ADD CONSTRAINT "import_profiles_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "import_profiles" ADD CONSTRAINT "import_profiles_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_results" ADD CONSTRAINT "check_results_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_results" ADD CONSTRAINT "check_results_recorded_by_persons_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_results" ADD CONSTRAINT "check_results_standard_fk" FOREIGN KEY ("site_id","standard_id") REFERENCES "public"."check_standards"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_standards" ADD CONSTRAINT "check_standards_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "check_standards" ADD CONSTRAINT "check_standards_method_fk" FOREIGN KEY ("site_id","method_id") REFERENCES "public"."methods"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "retests" ADD CONSTRAINT "retests_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "retests" ADD CONSTRAINT "retests_asked_by_persons_id_fk" FOREIGN KEY ("asked_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "retests" ADD CONSTRAINT "retests_answered_by_persons_id_fk" FOREIGN KEY ("answered_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "retests" ADD CONSTRAINT "retests_sample_fk" FOREIGN KEY ("site_id","sample_id") REFERENCES "public"."samples"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "retests" ADD CONSTRAINT "retests_result_fk" FOREIGN KEY ("site_id","result_sample_id") REFERENCES "public"."samples"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_requests" ADD CONSTRAINT "sample_requests_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_requests" ADD CONSTRAINT "sample_requests_asked_by_persons_id_fk" FOREIGN KEY ("asked_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_requests" ADD CONSTRAINT "sample_requests_withdrawn_by_persons_id_fk" FOREIGN KEY ("withdrawn_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_requests" ADD CONSTRAINT "sample_requests_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_requests" ADD CONSTRAINT "sample_requests_point_fk" FOREIGN KEY ("site_id","sample_point_id") REFERENCES "public"."sample_points"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples_not_taken" ADD CONSTRAINT "samples_not_taken_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples_not_taken" ADD CONSTRAINT "samples_not_taken_recorded_by_persons_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples_not_taken" ADD CONSTRAINT "samples_not_taken_point_fk" FOREIGN KEY ("site_id","sample_point_id") REFERENCES "public"."sample_points"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "import_profiles_signature_key" ON "import_profiles" USING btree ("site_id","signature") WHERE "import_profiles"."archived_at" is null;--> statement-breakpoint
CREATE INDEX "check_results_standard" ON "check_results" USING btree ("site_id","standard_id","measured_at");--> statement-breakpoint
CREATE UNIQUE INDEX "check_standards_name_key" ON "check_standards" USING btree ("site_id","method_id",lower("name"));--> statement-breakpoint
CREATE UNIQUE INDEX "retests_open_key" ON "retests" USING btree ("site_id","sample_id") WHERE "retests"."answer" is null;--> statement-breakpoint
CREATE INDEX "sample_requests_open" ON "sample_requests" USING btree ("site_id","until_at");--> statement-breakpoint
CREATE INDEX "samples_not_taken_point" ON "samples_not_taken" USING btree ("site_id","sample_point_id","asked_for");--> statement-breakpoint
ALTER TABLE "sample_imports" ADD CONSTRAINT "sample_imports_profile_fk" FOREIGN KEY ("site_id","profile_id") REFERENCES "public"."import_profiles"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_supersedes_fk" FOREIGN KEY ("site_id","supersedes_id") REFERENCES "public"."samples"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "samples_held" ON "samples" USING btree ("site_id") WHERE "samples"."held_since" is not null and "samples"."superseded_at" is null and "samples"."withdrawn_at" is null;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_entry_key" UNIQUE("site_id","entry_key");--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_reason_of_change" CHECK (("samples"."supersedes_id" is null) = ("samples"."change_reason" is null));