CREATE TABLE "audit_entries" (
	"id" bigint PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "audit_entries_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1 CACHE 1),
	"at" timestamp (3) with time zone NOT NULL,
	"site_id" integer,
	"person_id" integer,
	"person_name" text NOT NULL,
	"from_address" text NOT NULL,
	"action" text NOT NULL,
	"entity" text NOT NULL,
	"entity_id" text NOT NULL,
	"entity_name" text NOT NULL,
	"before" jsonb,
	"after" jsonb,
	"reason" text DEFAULT '' NOT NULL,
	"request_id" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "checkpoints" (
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"revision_id" integer NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"state" "bytea" NOT NULL,
	CONSTRAINT "checkpoints_pkey" PRIMARY KEY("site_id","soft_sensor_id","revision_id","at")
);
--> statement-breakpoint
CREATE TABLE "health_days" (
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"day" text NOT NULL,
	"health" text NOT NULL,
	CONSTRAINT "health_days_pkey" PRIMARY KEY("site_id","soft_sensor_id","day"),
	CONSTRAINT "health_days_health" CHECK ("health_days"."health" in ('fit', 'watch', 'unfit', 'unproven')),
	CONSTRAINT "health_days_day_form" CHECK ("health_days"."day" ~ '^\d{4}-\d{2}-\d{2}$')
);
--> statement-breakpoint
CREATE TABLE "pairs" (
	"id" bigint PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "pairs_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"sample_id" bigint NOT NULL,
	"revision_id" integer,
	"taken_at" timestamp (3) with time zone NOT NULL,
	"reported_at" timestamp (3) with time zone NOT NULL,
	"reference" double precision NOT NULL,
	"estimate" double precision,
	"estimate_sd" double precision,
	"spread" double precision,
	"error" double precision,
	"origin" text NOT NULL,
	"not_counted" text,
	"computed_at" timestamp (3) with time zone NOT NULL,
	"superseded_at" timestamp (3) with time zone,
	CONSTRAINT "pairs_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "pairs_origin" CHECK ("pairs"."origin" in ('recorded', 'replayed')),
	CONSTRAINT "pairs_counted" CHECK ("pairs"."not_counted" is not null or "pairs"."error" is not null),
	CONSTRAINT "pairs_error" CHECK (("pairs"."error" is null) = ("pairs"."estimate" is null))
);
--> statement-breakpoint
CREATE TABLE "replays" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "replays_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"revision_id" integer,
	"draft_id" integer,
	"model" jsonb NOT NULL,
	"from_at" timestamp (3) with time zone NOT NULL,
	"to_at" timestamp (3) with time zone NOT NULL,
	"judged_from" timestamp (3) with time zone NOT NULL,
	"update_factor" double precision NOT NULL,
	"run_id" integer,
	"figures" jsonb,
	"packed" "bytea",
	"created_by" integer NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "replays_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "replays_period" CHECK ("replays"."from_at" < "replays"."to_at")
);
--> statement-breakpoint
CREATE TABLE "site_months" (
	"site_id" integer NOT NULL,
	"month" text NOT NULL,
	"unfit" integer NOT NULL,
	"unproven" integer NOT NULL,
	CONSTRAINT "site_months_pkey" PRIMARY KEY("site_id","month"),
	CONSTRAINT "site_months_form" CHECK ("site_months"."month" ~ '^\d{4}-\d{2}$')
);
--> statement-breakpoint
CREATE TABLE "site_summaries" (
	"site_id" integer PRIMARY KEY NOT NULL,
	"total" integer NOT NULL,
	"fit" integer NOT NULL,
	"watch" integer NOT NULL,
	"unfit" integer NOT NULL,
	"unproven" integer NOT NULL,
	"unfit_in_closed_loop" integer NOT NULL,
	"not_in_service" integer NOT NULL
);
--> statement-breakpoint
CREATE TABLE "soft_sensor_status" (
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"health" text NOT NULL,
	"severity" integer NOT NULL,
	"reasons" jsonb NOT NULL,
	"bias" double precision,
	"bias_low" double precision,
	"bias_high" double precision,
	"rmse" double precision,
	"counted" integer DEFAULT 0 NOT NULL,
	"allowed_error" double precision,
	"last_errors" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"last_reference_at" timestamp (3) with time zone,
	"last_reference_value" double precision,
	"current_at" timestamp (3) with time zone,
	"current_value" double precision,
	"current_sd" double precision,
	"health_since" timestamp (3) with time zone NOT NULL,
	"in_service" boolean DEFAULT false NOT NULL,
	"owner_id" integer,
	"rank" double precision DEFAULT 0 NOT NULL,
	"judged_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "soft_sensor_status_pkey" PRIMARY KEY("site_id","soft_sensor_id"),
	CONSTRAINT "soft_sensor_status_health" CHECK ("soft_sensor_status"."health" in ('fit', 'watch', 'unfit', 'unproven'))
);
--> statement-breakpoint
CREATE TABLE "soft_sensor_work" (
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"dirty_from" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "soft_sensor_work_pkey" PRIMARY KEY("site_id","soft_sensor_id")
);
--> statement-breakpoint
CREATE TABLE "file_chunks" (
	"site_id" integer NOT NULL,
	"file_id" integer NOT NULL,
	"chunk" integer NOT NULL,
	"bytes" "bytea" NOT NULL,
	CONSTRAINT "file_chunks_pkey" PRIMARY KEY("site_id","file_id","chunk")
);
--> statement-breakpoint
CREATE TABLE "files" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "files_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"name" text NOT NULL,
	"size" bigint NOT NULL,
	"sha256" text NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"created_by" integer NOT NULL,
	CONSTRAINT "files_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "history_imports" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "history_imports_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"file_id" integer,
	"file_name" text NOT NULL,
	"file_size" bigint NOT NULL,
	"sha256" text NOT NULL,
	"layout" jsonb,
	"replace_existing" boolean DEFAULT false NOT NULL,
	"state" text DEFAULT 'uploaded' NOT NULL,
	"line_done" bigint DEFAULT 0 NOT NULL,
	"added" bigint DEFAULT 0 NOT NULL,
	"unchanged" bigint DEFAULT 0 NOT NULL,
	"replaced" bigint DEFAULT 0 NOT NULL,
	"kept_different" bigint DEFAULT 0 NOT NULL,
	"refused" bigint DEFAULT 0 NOT NULL,
	"first_at" timestamp (3) with time zone,
	"last_at" timestamp (3) with time zone,
	"run_id" integer,
	"created_by" integer NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"finished_at" timestamp (3) with time zone,
	CONSTRAINT "history_imports_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "history_imports_state" CHECK ("history_imports"."state" in ('uploaded', 'waiting', 'running', 'done', 'failed', 'cancelled'))
);
--> statement-breakpoint
CREATE TABLE "history_refusals" (
	"site_id" integer NOT NULL,
	"import_id" integer NOT NULL,
	"line" bigint NOT NULL,
	"column" integer NOT NULL,
	"code" text NOT NULL,
	"found" text NOT NULL,
	CONSTRAINT "history_refusals_pkey" PRIMARY KEY("site_id","import_id","line","column")
);
--> statement-breakpoint
CREATE TABLE "local_mails" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "local_mails_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"received_at" timestamp (3) with time zone NOT NULL,
	"message_id" text NOT NULL,
	"from_address" text NOT NULL,
	"to_address" text NOT NULL,
	"subject" text NOT NULL,
	"raw" "bytea" NOT NULL
);
--> statement-breakpoint
CREATE TABLE "mails" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "mails_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"key" text NOT NULL,
	"person_id" integer,
	"to_address" text NOT NULL,
	"template" text NOT NULL,
	"figures" jsonb NOT NULL,
	"message_id" text NOT NULL,
	"subject" text,
	"state" text DEFAULT 'waiting' NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"last_error" text,
	"created_at" timestamp (3) with time zone NOT NULL,
	"sent_at" timestamp (3) with time zone,
	CONSTRAINT "mails_key_unique" UNIQUE("key"),
	CONSTRAINT "mails_message_id_unique" UNIQUE("message_id"),
	CONSTRAINT "mails_state" CHECK ("mails"."state" in ('waiting', 'sent', 'failed')),
	CONSTRAINT "mails_sent" CHECK (("mails"."sent_at" is not null) = ("mails"."state" = 'sent'))
);
--> statement-breakpoint
CREATE TABLE "one_time_links" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "one_time_links_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"person_id" integer,
	"token_hash" text NOT NULL,
	"purpose" text NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL,
	"used_at" timestamp (3) with time zone,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	CONSTRAINT "one_time_links_token_hash_unique" UNIQUE("token_hash"),
	CONSTRAINT "one_time_links_purpose" CHECK ("one_time_links"."purpose" in ('set-password', 'reset-password', 'first-administrator')),
	CONSTRAINT "one_time_links_person" CHECK (("one_time_links"."person_id" is null) = ("one_time_links"."purpose" = 'first-administrator'))
);
--> statement-breakpoint
CREATE TABLE "persons" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "persons_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"name" text NOT NULL,
	"email" text NOT NULL,
	"password_hash" text,
	"administrator" boolean DEFAULT false NOT NULL,
	"deactivated_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"id" text PRIMARY KEY NOT NULL,
	"person_id" integer NOT NULL,
	"expires_at" timestamp (3) with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "site_roles" (
	"person_id" integer NOT NULL,
	"site_id" integer NOT NULL,
	"role" text NOT NULL,
	CONSTRAINT "site_roles_person_id_site_id_role_pk" PRIMARY KEY("person_id","site_id","role"),
	CONSTRAINT "site_roles_role" CHECK ("site_roles"."role" in ('engineer', 'technician', 'manager', 'reader'))
);
--> statement-breakpoint
CREATE TABLE "drafts" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "drafts_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"model" jsonb NOT NULL,
	"fit" jsonb,
	"version" integer DEFAULT 1 NOT NULL,
	"updated_at" timestamp (3) with time zone NOT NULL,
	"updated_by" integer NOT NULL,
	CONSTRAINT "drafts_sensor_key" UNIQUE("site_id","soft_sensor_id"),
	CONSTRAINT "drafts_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "life_states" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "life_states_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"state" text NOT NULL,
	"effective_from" timestamp (3) with time zone NOT NULL,
	"recorded_by" integer NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	CONSTRAINT "life_states_effective_key" UNIQUE("site_id","soft_sensor_id","effective_from"),
	CONSTRAINT "life_states_state" CHECK ("life_states"."state" in ('draft', 'in-validation', 'in-service', 'suspended', 'retired'))
);
--> statement-breakpoint
CREATE TABLE "ownerships" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "ownerships_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"owner_id" integer,
	"deputy_id" integer,
	"approver_id" integer,
	"lab_contact_id" integer,
	"effective_from" timestamp (3) with time zone NOT NULL,
	"recorded_by" integer NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	CONSTRAINT "ownerships_effective_key" UNIQUE("site_id","soft_sensor_id","effective_from"),
	CONSTRAINT "ownerships_deputy" CHECK ("ownerships"."deputy_id" <> "ownerships"."owner_id")
);
--> statement-breakpoint
CREATE TABLE "revisions" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "revisions_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"number" integer NOT NULL,
	"model" jsonb NOT NULL,
	"fit" jsonb,
	"reason" text NOT NULL,
	"change_reference" text DEFAULT '' NOT NULL,
	"proposed_at" timestamp (3) with time zone NOT NULL,
	"proposed_by" integer NOT NULL,
	"edited_by" integer[] DEFAULT '{}' NOT NULL,
	"decision" text,
	"decided_at" timestamp (3) with time zone,
	"decided_by" integer,
	"decision_reason" text DEFAULT '' NOT NULL,
	"effective_from" timestamp (3) with time zone,
	CONSTRAINT "revisions_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "revisions_number_key" UNIQUE("site_id","soft_sensor_id","number"),
	CONSTRAINT "revisions_effective_key" UNIQUE("site_id","soft_sensor_id","effective_from"),
	CONSTRAINT "revisions_decision" CHECK ("revisions"."decision" in ('approved', 'declined', 'withdrawn')),
	CONSTRAINT "revisions_decided" CHECK (("revisions"."decision" is null) = ("revisions"."decided_at" is null) and ("revisions"."decision" is null) = ("revisions"."decided_by" is null)),
	CONSTRAINT "revisions_second_person" CHECK ("revisions"."decision" is distinct from 'approved' or ("revisions"."decided_by" <> "revisions"."proposed_by" and not "revisions"."decided_by" = any("revisions"."edited_by"))),
	CONSTRAINT "revisions_effective" CHECK (("revisions"."effective_from" is not null) = ("revisions"."decision" is not distinct from 'approved') and "revisions"."effective_from" >= "revisions"."decided_at")
);
--> statement-breakpoint
CREATE TABLE "soft_sensors" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "soft_sensors_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"unit_id" integer NOT NULL,
	"tag_name" text NOT NULL,
	"name" text NOT NULL,
	"quantity" text NOT NULL,
	"unit" text NOT NULL,
	"decimals" integer NOT NULL,
	"range_low" double precision,
	"range_high" double precision,
	"purpose" text DEFAULT '' NOT NULL,
	"importance_class" text NOT NULL,
	"consumers" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"estimate_tag_id" integer NOT NULL,
	"sample_point_id" integer,
	"method_id" integer,
	"transport_delay_ms" integer DEFAULT 0 NOT NULL,
	"pairing_window_ms" integer DEFAULT 0 NOT NULL,
	"steady_state_gate" boolean DEFAULT true NOT NULL,
	"promised_reference_ms" double precision NOT NULL,
	"allowed_error_absolute" double precision,
	"allowed_error_percent" double precision,
	"allowed_spread" double precision,
	"log_scale" boolean DEFAULT false NOT NULL,
	"history_arrives" text DEFAULT 'uploaded' NOT NULL,
	"history_every_ms" double precision NOT NULL,
	"external_corrected_since" timestamp (3) with time zone,
	"correction_mode" text DEFAULT 'propose' NOT NULL,
	"update_factor" double precision DEFAULT 0.2 NOT NULL,
	"recalibration_months" integer NOT NULL,
	"review_months" integer NOT NULL,
	"fallback" text DEFAULT '' NOT NULL,
	"limitations" text DEFAULT '' NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"created_by" integer NOT NULL,
	CONSTRAINT "soft_sensors_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "soft_sensors_class" CHECK ("soft_sensors"."importance_class" in ('A', 'B', 'C')),
	CONSTRAINT "soft_sensors_decimals" CHECK ("soft_sensors"."decimals" between 0 and 6),
	CONSTRAINT "soft_sensors_range" CHECK ("soft_sensors"."range_low" < "soft_sensors"."range_high"),
	CONSTRAINT "soft_sensors_allowed" CHECK (coalesce("soft_sensors"."allowed_error_absolute", "soft_sensors"."allowed_error_percent") > 0),
	CONSTRAINT "soft_sensors_arrives" CHECK ("soft_sensors"."history_arrives" in ('live', 'uploaded')),
	CONSTRAINT "soft_sensors_mode" CHECK ("soft_sensors"."correction_mode" in ('monitor', 'propose', 'automatic')),
	CONSTRAINT "soft_sensors_factor" CHECK ("soft_sensors"."update_factor" > 0 and "soft_sensors"."update_factor" <= 1),
	CONSTRAINT "soft_sensors_intervals" CHECK ("soft_sensors"."recalibration_months" > 0 and "soft_sensors"."review_months" > 0)
);
--> statement-breakpoint
CREATE TABLE "runs" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "runs_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"kind" text NOT NULL,
	"subject_id" integer,
	"state" text DEFAULT 'waiting' NOT NULL,
	"done" bigint DEFAULT 0 NOT NULL,
	"total" bigint,
	"cancel_requested" boolean DEFAULT false NOT NULL,
	"problem" jsonb,
	"result" jsonb,
	"created_by" integer,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL,
	"started_at" timestamp (3) with time zone,
	"finished_at" timestamp (3) with time zone,
	CONSTRAINT "runs_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "runs_kind" CHECK ("runs"."kind" in ('history-import', 'fit', 'replay', 'estimate')),
	CONSTRAINT "runs_state" CHECK ("runs"."state" in ('waiting', 'running', 'done', 'failed', 'cancelled')),
	CONSTRAINT "runs_finished" CHECK (("runs"."finished_at" is not null) = ("runs"."state" in ('done', 'failed', 'cancelled')))
);
--> statement-breakpoint
CREATE TABLE "methods" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "methods_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"name" text NOT NULL,
	"quantity" text DEFAULT '' NOT NULL,
	"unit" text NOT NULL,
	"repeatability" double precision,
	"reproducibility" double precision,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "methods_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "methods_precision" CHECK ("methods"."repeatability" >= 0 and "methods"."reproducibility" >= 0)
);
--> statement-breakpoint
CREATE TABLE "sample_imports" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "sample_imports_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"file_id" integer NOT NULL,
	"file_name" text NOT NULL,
	"sha256" text NOT NULL,
	"mapping" jsonb,
	"state" text DEFAULT 'uploaded' NOT NULL,
	"counts" jsonb,
	"version" integer DEFAULT 1 NOT NULL,
	"created_by" integer NOT NULL,
	"created_at" timestamp (3) with time zone NOT NULL,
	"committed_at" timestamp (3) with time zone,
	"undone_at" timestamp (3) with time zone,
	"undone_by" integer,
	CONSTRAINT "sample_imports_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "sample_imports_state" CHECK ("sample_imports"."state" in ('uploaded', 'committed', 'undone')),
	CONSTRAINT "sample_imports_committed" CHECK (("sample_imports"."committed_at" is not null) = ("sample_imports"."state" in ('committed', 'undone')))
);
--> statement-breakpoint
CREATE TABLE "sample_points" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "sample_points_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"unit_id" integer,
	"name" text NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "sample_points_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "samples" (
	"id" bigint PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "samples_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 9223372036854775807 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"sample_point_id" integer NOT NULL,
	"method_id" integer,
	"sample_number" text NOT NULL,
	"version" integer DEFAULT 1 NOT NULL,
	"taken_at" timestamp (3) with time zone,
	"taken_on" date,
	"reported_at" timestamp (3) with time zone NOT NULL,
	"value" double precision NOT NULL,
	"qualifier" text,
	"unit" text NOT NULL,
	"as_written" text NOT NULL,
	"flags" text[] DEFAULT '{}' NOT NULL,
	"held_since" timestamp (3) with time zone,
	"import_id" integer,
	"line" integer,
	"entered_by" integer NOT NULL,
	"entered_at" timestamp (3) with time zone NOT NULL,
	"superseded_at" timestamp (3) with time zone,
	"withdrawn_at" timestamp (3) with time zone,
	CONSTRAINT "samples_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "samples_taken_known" CHECK (("samples"."taken_at" is null) <> ("samples"."taken_on" is null)),
	CONSTRAINT "samples_qualifier" CHECK ("samples"."qualifier" in ('<', '>'))
);
--> statement-breakpoint
CREATE TABLE "areas" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "areas_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"name" text NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "areas_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "sites" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "sites_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"name" text NOT NULL,
	"zone" text NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	"created_at" timestamp (3) with time zone DEFAULT now() NOT NULL
);
--> statement-breakpoint
CREATE TABLE "units" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "units_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"area_id" integer NOT NULL,
	"name" text NOT NULL,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "units_site_id_key" UNIQUE("site_id","id")
);
--> statement-breakpoint
CREATE TABLE "dirty_hours" (
	"site_id" integer NOT NULL,
	"tag_id" integer NOT NULL,
	"hour" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "dirty_hours_pkey" PRIMARY KEY("site_id","tag_id","hour")
);
--> statement-breakpoint
CREATE TABLE "reading_hours" (
	"site_id" integer NOT NULL,
	"tag_id" integer NOT NULL,
	"hour" timestamp (3) with time zone NOT NULL,
	"readings" integer NOT NULL,
	"bad" integer NOT NULL,
	"mean" double precision,
	"low" double precision,
	"high" double precision,
	CONSTRAINT "reading_hours_pkey" PRIMARY KEY("site_id","tag_id","hour")
);
--> statement-breakpoint
CREATE TABLE "readings" (
	"site_id" integer NOT NULL,
	"tag_id" integer NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"value" double precision NOT NULL,
	"sd" double precision,
	"quality" smallint DEFAULT 0 NOT NULL,
	CONSTRAINT "readings_pkey" PRIMARY KEY("site_id","tag_id","at")
);
--> statement-breakpoint
CREATE TABLE "tag_spans" (
	"site_id" integer NOT NULL,
	"tag_id" integer NOT NULL,
	"first_at" timestamp (3) with time zone NOT NULL,
	"last_at" timestamp (3) with time zone NOT NULL,
	"last_value" double precision NOT NULL,
	"readings" bigint NOT NULL,
	CONSTRAINT "tag_spans_pkey" PRIMARY KEY("site_id","tag_id")
);
--> statement-breakpoint
CREATE TABLE "tags" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "tags_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"unit_id" integer,
	"name" text NOT NULL,
	"description" text DEFAULT '' NOT NULL,
	"unit" text NOT NULL,
	"kind" text DEFAULT 'measured' NOT NULL,
	"range_low" double precision,
	"range_high" double precision,
	"archived_at" timestamp (3) with time zone,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "tags_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "tags_kind" CHECK ("tags"."kind" in ('measured', 'estimate', 'shadow')),
	CONSTRAINT "tags_range" CHECK ("tags"."range_low" < "tags"."range_high")
);
--> statement-breakpoint
ALTER TABLE "audit_entries" ADD CONSTRAINT "audit_entries_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "audit_entries" ADD CONSTRAINT "audit_entries_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "checkpoints" ADD CONSTRAINT "checkpoints_revision_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "health_days" ADD CONSTRAINT "health_days_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pairs" ADD CONSTRAINT "pairs_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pairs" ADD CONSTRAINT "pairs_sample_fk" FOREIGN KEY ("site_id","sample_id") REFERENCES "public"."samples"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pairs" ADD CONSTRAINT "pairs_revision_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replays" ADD CONSTRAINT "replays_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replays" ADD CONSTRAINT "replays_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replays" ADD CONSTRAINT "replays_revision_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replays" ADD CONSTRAINT "replays_draft_fk" FOREIGN KEY ("site_id","draft_id") REFERENCES "public"."drafts"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "replays" ADD CONSTRAINT "replays_run_fk" FOREIGN KEY ("site_id","run_id") REFERENCES "public"."runs"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site_months" ADD CONSTRAINT "site_months_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site_summaries" ADD CONSTRAINT "site_summaries_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD CONSTRAINT "soft_sensor_status_owner_id_persons_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD CONSTRAINT "soft_sensor_status_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensor_work" ADD CONSTRAINT "soft_sensor_work_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "file_chunks" ADD CONSTRAINT "file_chunks_file_fk" FOREIGN KEY ("site_id","file_id") REFERENCES "public"."files"("site_id","id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "files" ADD CONSTRAINT "files_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "history_imports" ADD CONSTRAINT "history_imports_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "history_imports" ADD CONSTRAINT "history_imports_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "history_imports" ADD CONSTRAINT "history_imports_file_fk" FOREIGN KEY ("site_id","file_id") REFERENCES "public"."files"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "history_imports" ADD CONSTRAINT "history_imports_run_fk" FOREIGN KEY ("site_id","run_id") REFERENCES "public"."runs"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "history_refusals" ADD CONSTRAINT "history_refusals_import_fk" FOREIGN KEY ("site_id","import_id") REFERENCES "public"."history_imports"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "mails" ADD CONSTRAINT "mails_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "one_time_links" ADD CONSTRAINT "one_time_links_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site_roles" ADD CONSTRAINT "site_roles_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "site_roles" ADD CONSTRAINT "site_roles_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "drafts" ADD CONSTRAINT "drafts_updated_by_persons_id_fk" FOREIGN KEY ("updated_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "drafts" ADD CONSTRAINT "drafts_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "life_states" ADD CONSTRAINT "life_states_recorded_by_persons_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "life_states" ADD CONSTRAINT "life_states_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_owner_id_persons_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_deputy_id_persons_id_fk" FOREIGN KEY ("deputy_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_approver_id_persons_id_fk" FOREIGN KEY ("approver_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_lab_contact_id_persons_id_fk" FOREIGN KEY ("lab_contact_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_recorded_by_persons_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "ownerships" ADD CONSTRAINT "ownerships_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_proposed_by_persons_id_fk" FOREIGN KEY ("proposed_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_decided_by_persons_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "revisions" ADD CONSTRAINT "revisions_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_unit_fk" FOREIGN KEY ("site_id","unit_id") REFERENCES "public"."units"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_tag_fk" FOREIGN KEY ("site_id","estimate_tag_id") REFERENCES "public"."tags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_point_fk" FOREIGN KEY ("site_id","sample_point_id") REFERENCES "public"."sample_points"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_method_fk" FOREIGN KEY ("site_id","method_id") REFERENCES "public"."methods"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "runs" ADD CONSTRAINT "runs_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "methods" ADD CONSTRAINT "methods_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD CONSTRAINT "sample_imports_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD CONSTRAINT "sample_imports_created_by_persons_id_fk" FOREIGN KEY ("created_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD CONSTRAINT "sample_imports_undone_by_persons_id_fk" FOREIGN KEY ("undone_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_imports" ADD CONSTRAINT "sample_imports_file_fk" FOREIGN KEY ("site_id","file_id") REFERENCES "public"."files"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_points" ADD CONSTRAINT "sample_points_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sample_points" ADD CONSTRAINT "sample_points_unit_fk" FOREIGN KEY ("site_id","unit_id") REFERENCES "public"."units"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_entered_by_persons_id_fk" FOREIGN KEY ("entered_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_point_fk" FOREIGN KEY ("site_id","sample_point_id") REFERENCES "public"."sample_points"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_method_fk" FOREIGN KEY ("site_id","method_id") REFERENCES "public"."methods"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "samples" ADD CONSTRAINT "samples_import_fk" FOREIGN KEY ("site_id","import_id") REFERENCES "public"."sample_imports"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "areas" ADD CONSTRAINT "areas_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "units" ADD CONSTRAINT "units_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "units" ADD CONSTRAINT "units_area_fk" FOREIGN KEY ("site_id","area_id") REFERENCES "public"."areas"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tag_spans" ADD CONSTRAINT "tag_spans_tag_fk" FOREIGN KEY ("site_id","tag_id") REFERENCES "public"."tags"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tags" ADD CONSTRAINT "tags_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "tags" ADD CONSTRAINT "tags_unit_fk" FOREIGN KEY ("site_id","unit_id") REFERENCES "public"."units"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "audit_entries_site" ON "audit_entries" USING btree ("site_id","at");--> statement-breakpoint
CREATE INDEX "audit_entries_entity" ON "audit_entries" USING btree ("entity","entity_id","at");--> statement-breakpoint
CREATE INDEX "health_days_day" ON "health_days" USING btree ("site_id","day");--> statement-breakpoint
CREATE UNIQUE INDEX "pairs_current_key" ON "pairs" USING btree ("site_id","soft_sensor_id","sample_id") WHERE "pairs"."superseded_at" is null;--> statement-breakpoint
CREATE INDEX "pairs_taken" ON "pairs" USING btree ("site_id","soft_sensor_id","taken_at");--> statement-breakpoint
CREATE INDEX "replays_sensor" ON "replays" USING btree ("site_id","soft_sensor_id","created_at");--> statement-breakpoint
CREATE INDEX "soft_sensor_status_worst" ON "soft_sensor_status" USING btree ("rank" DESC NULLS LAST) WHERE "soft_sensor_status"."in_service";--> statement-breakpoint
CREATE INDEX "soft_sensor_status_unowned" ON "soft_sensor_status" USING btree ("site_id") WHERE "soft_sensor_status"."in_service" and "soft_sensor_status"."owner_id" is null;--> statement-breakpoint
CREATE INDEX "soft_sensor_status_owner" ON "soft_sensor_status" USING btree ("owner_id");--> statement-breakpoint
CREATE INDEX "history_imports_sha" ON "history_imports" USING btree ("site_id","sha256");--> statement-breakpoint
CREATE INDEX "local_mails_received" ON "local_mails" USING btree ("received_at");--> statement-breakpoint
CREATE INDEX "mails_created" ON "mails" USING btree ("created_at");--> statement-breakpoint
CREATE UNIQUE INDEX "persons_email_key" ON "persons" USING btree (lower("email"));--> statement-breakpoint
CREATE UNIQUE INDEX "soft_sensors_tag_name_key" ON "soft_sensors" USING btree ("site_id",lower("tag_name"));--> statement-breakpoint
CREATE INDEX "soft_sensors_sample_point" ON "soft_sensors" USING btree ("site_id","sample_point_id");--> statement-breakpoint
CREATE INDEX "runs_subject" ON "runs" USING btree ("site_id","kind","subject_id");--> statement-breakpoint
CREATE UNIQUE INDEX "methods_name_key" ON "methods" USING btree ("site_id",lower("name"));--> statement-breakpoint
CREATE INDEX "sample_imports_sha" ON "sample_imports" USING btree ("site_id","sha256");--> statement-breakpoint
CREATE UNIQUE INDEX "sample_points_name_key" ON "sample_points" USING btree ("site_id",lower("name"));--> statement-breakpoint
CREATE UNIQUE INDEX "samples_current_key" ON "samples" USING btree ("site_id","sample_point_id",coalesce("method_id", 0),"sample_number") WHERE "samples"."superseded_at" is null and "samples"."withdrawn_at" is null;--> statement-breakpoint
CREATE INDEX "samples_taken" ON "samples" USING btree ("site_id","sample_point_id","taken_at");--> statement-breakpoint
CREATE INDEX "samples_import" ON "samples" USING btree ("site_id","import_id");--> statement-breakpoint
CREATE UNIQUE INDEX "areas_name_key" ON "areas" USING btree ("site_id",lower("name"));--> statement-breakpoint
CREATE UNIQUE INDEX "sites_name_key" ON "sites" USING btree (lower("name"));--> statement-breakpoint
CREATE UNIQUE INDEX "units_name_key" ON "units" USING btree ("site_id","area_id",lower("name"));--> statement-breakpoint
CREATE INDEX "tag_spans_last" ON "tag_spans" USING btree ("site_id","last_at");--> statement-breakpoint
CREATE UNIQUE INDEX "tags_name_key" ON "tags" USING btree ("site_id",lower("name"));