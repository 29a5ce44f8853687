CREATE TABLE "calibrations" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "calibrations_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"revision_id" integer NOT NULL,
	"number" integer NOT NULL,
	"kind" text NOT NULL,
	"slope" double precision NOT NULL,
	"offset" double precision NOT NULL,
	"slope_before" double precision NOT NULL,
	"offset_before" double precision NOT NULL,
	"evidence" jsonb NOT NULL,
	"pair_ids" bigint[] NOT NULL,
	"owner_id" integer,
	"reason" text NOT NULL,
	"proposed_at" timestamp (3) with time zone NOT NULL,
	"proposed_by" integer NOT NULL,
	"to_be_entered" boolean NOT NULL,
	"decision" text,
	"decided_at" timestamp (3) with time zone,
	"decided_by" integer,
	"decision_reason" text DEFAULT '' NOT NULL,
	"entered_by" text,
	"entered_at" timestamp (3) with time zone,
	"entered_recorded_by" integer,
	"entered_recorded_at" timestamp (3) with time zone,
	"effective_from" timestamp (3) with time zone,
	CONSTRAINT "calibrations_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "calibrations_number_key" UNIQUE("site_id","soft_sensor_id","number"),
	CONSTRAINT "calibrations_effective_key" UNIQUE("site_id","soft_sensor_id","effective_from"),
	CONSTRAINT "calibrations_kind" CHECK ("calibrations"."kind" in ('as-found', 'bias', 'proportional', 'linear', 'deming')),
	CONSTRAINT "calibrations_slope" CHECK ("calibrations"."slope" > 0 and "calibrations"."slope_before" > 0),
	CONSTRAINT "calibrations_decision" CHECK ("calibrations"."decision" in ('approved', 'confirmed', 'declined', 'withdrawn')),
	CONSTRAINT "calibrations_decided" CHECK (("calibrations"."decision" is null) = ("calibrations"."decided_at" is null) and ("calibrations"."decision" is null) = ("calibrations"."decided_by" is null)),
	CONSTRAINT "calibrations_second_person" CHECK ("calibrations"."decision" is distinct from 'approved' or "calibrations"."decided_by" <> "calibrations"."proposed_by"),
	CONSTRAINT "calibrations_left_as_found" CHECK ("calibrations"."kind" <> 'as-found' or ("calibrations"."slope" = "calibrations"."slope_before" and "calibrations"."offset" = "calibrations"."offset_before" and not "calibrations"."to_be_entered")),
	CONSTRAINT "calibrations_confirmed" CHECK ("calibrations"."decision" is distinct from 'confirmed' or ("calibrations"."kind" = 'as-found' and "calibrations"."decided_by" = "calibrations"."proposed_by")),
	CONSTRAINT "calibrations_entered" CHECK (("calibrations"."entered_at" is null) = ("calibrations"."entered_by" is null) and ("calibrations"."entered_at" is null or "calibrations"."to_be_entered")),
	CONSTRAINT "calibrations_effective" CHECK (("calibrations"."effective_from" is not null) = (coalesce("calibrations"."decision" in ('approved', 'confirmed'), false) and (not "calibrations"."to_be_entered" or "calibrations"."entered_at" is not null)) and "calibrations"."effective_from" >= "calibrations"."decided_at")
);
--> statement-breakpoint
CREATE TABLE "digests" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "digests_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"person_id" integer NOT NULL,
	"day" date NOT NULL,
	"mail_id" integer NOT NULL,
	"composed_at" timestamp (3) with time zone NOT NULL,
	CONSTRAINT "digests_person_day_key" UNIQUE("person_id","day")
);
--> statement-breakpoint
CREATE TABLE "duties" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "duties_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"kind" text NOT NULL,
	"due_on" date NOT NULL,
	"opened_at" timestamp (3) with time zone NOT NULL,
	"opened_on" date NOT NULL,
	"assignee_id" integer,
	"state" text DEFAULT 'open' NOT NULL,
	"closed_at" timestamp (3) with time zone,
	"closed_by" integer,
	"reason" text DEFAULT '' NOT NULL,
	"calibration_id" integer,
	"review_id" integer,
	"version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "duties_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "duties_kind" CHECK ("duties"."kind" in ('recalibration', 'review', 'ownership-gap')),
	CONSTRAINT "duties_state" CHECK ("duties"."state" in ('open', 'done', 'waived')),
	CONSTRAINT "duties_closed" CHECK (("duties"."closed_at" is null) = ("duties"."state" = 'open')),
	CONSTRAINT "duties_waived" CHECK ("duties"."state" <> 'waived' or ("duties"."closed_by" is not null and "duties"."reason" <> ''))
);
--> statement-breakpoint
CREATE TABLE "handovers" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "handovers_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"part" text NOT NULL,
	"from_id" integer,
	"to_id" integer NOT NULL,
	"proposed_at" timestamp (3) with time zone NOT NULL,
	"proposed_by" integer NOT NULL,
	"reason" text DEFAULT '' NOT NULL,
	"answer" text,
	"answered_at" timestamp (3) with time zone,
	"answered_by" integer,
	"answer_reason" text DEFAULT '' NOT NULL,
	CONSTRAINT "handovers_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "handovers_part" CHECK ("handovers"."part" in ('owner', 'deputy')),
	CONSTRAINT "handovers_answer" CHECK ("handovers"."answer" in ('accepted', 'declined', 'withdrawn')),
	CONSTRAINT "handovers_answered" CHECK (("handovers"."answer" is null) = ("handovers"."answered_at" is null) and ("handovers"."answer" is null) = ("handovers"."answered_by" is null)),
	CONSTRAINT "handovers_by_successor" CHECK ("handovers"."answer" is distinct from 'accepted' or "handovers"."answered_by" = "handovers"."to_id")
);
--> statement-breakpoint
CREATE TABLE "notices" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "notices_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"duty_id" integer,
	"calibration_id" integer,
	"revision_id" integer,
	"handover_id" integer,
	"stage" integer DEFAULT 0 NOT NULL,
	"person_id" integer NOT NULL,
	"decided_at" timestamp (3) with time zone NOT NULL,
	"digest_id" integer,
	"dropped_at" timestamp (3) with time zone,
	CONSTRAINT "notices_once" UNIQUE NULLS NOT DISTINCT("duty_id","calibration_id","revision_id","handover_id","stage","person_id"),
	CONSTRAINT "notices_subject" CHECK (num_nonnulls("notices"."duty_id", "notices"."calibration_id", "notices"."revision_id", "notices"."handover_id") = 1)
);
--> statement-breakpoint
CREATE TABLE "reviews" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "reviews_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"soft_sensor_id" integer NOT NULL,
	"done_at" timestamp (3) with time zone NOT NULL,
	"done_by" integer NOT NULL,
	"conclusion" text NOT NULL,
	"answers" jsonb NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	CONSTRAINT "reviews_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "reviews_conclusion" CHECK ("reviews"."conclusion" in ('keep', 'change', 'retire'))
);
--> statement-breakpoint
CREATE TABLE "events" (
	"id" integer PRIMARY KEY GENERATED ALWAYS AS IDENTITY (sequence name "events_id_seq" INCREMENT BY 1 MINVALUE 1 MAXVALUE 2147483647 START WITH 1 CACHE 1),
	"site_id" integer NOT NULL,
	"unit_id" integer,
	"soft_sensor_id" integer,
	"kind" text NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"note" text DEFAULT '' NOT NULL,
	"recorded_by" integer NOT NULL,
	"recorded_at" timestamp (3) with time zone NOT NULL,
	"withdrawn_at" timestamp (3) with time zone,
	"withdrawn_by" integer,
	"withdrawn_reason" text DEFAULT '' NOT NULL,
	CONSTRAINT "events_site_id_key" UNIQUE("site_id","id"),
	CONSTRAINT "events_subject" CHECK (("events"."unit_id" is null) <> ("events"."soft_sensor_id" is null)),
	CONSTRAINT "events_kind" CHECK ("events"."kind" in ('stop', 'start', 'grade-change', 'turnaround', 'instrument-replaced', 'method-change')),
	CONSTRAINT "events_withdrawn" CHECK (("events"."withdrawn_at" is null) = ("events"."withdrawn_by" is null))
);
--> statement-breakpoint
CREATE TABLE "board_looks" (
	"person_id" integer PRIMARY KEY NOT NULL,
	"looked_at" timestamp (3) with time zone NOT NULL,
	"previous_at" timestamp (3) with time zone
);
--> statement-breakpoint
ALTER TABLE "soft_sensors" DROP CONSTRAINT "soft_sensors_intervals";--> statement-breakpoint
ALTER TABLE "site_summaries" ADD COLUMN "stopped" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD COLUMN "health_before" text;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD COLUMN "stopped_since" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD COLUMN "recalibrated_at" timestamp (3) with time zone;--> statement-breakpoint
ALTER TABLE "soft_sensor_status" ADD COLUMN "references_since" integer DEFAULT 0 NOT NULL;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD COLUMN "recalibration_interval" jsonb;--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD COLUMN "review_interval" jsonb;--> statement-breakpoint
UPDATE "soft_sensors" SET
	"recalibration_interval" = jsonb_build_object('every', "recalibration_months", 'unit', 'months', 'counted', 'last-done', 'anchorOn', NULL),
	"review_interval" = jsonb_build_object('every', "review_months", 'unit', 'months', 'counted', 'last-done', 'anchorOn', NULL);--> statement-breakpoint
ALTER TABLE "soft_sensors" ALTER COLUMN "recalibration_interval" SET NOT NULL;--> statement-breakpoint
ALTER TABLE "soft_sensors" ALTER COLUMN "review_interval" SET NOT NULL;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_owner_id_persons_id_fk" FOREIGN KEY ("owner_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_proposed_by_persons_id_fk" FOREIGN KEY ("proposed_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_decided_by_persons_id_fk" FOREIGN KEY ("decided_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_entered_recorded_by_persons_id_fk" FOREIGN KEY ("entered_recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "calibrations" ADD CONSTRAINT "calibrations_revision_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "digests" ADD CONSTRAINT "digests_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "digests" ADD CONSTRAINT "digests_mail_id_mails_id_fk" FOREIGN KEY ("mail_id") REFERENCES "public"."mails"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "duties" ADD CONSTRAINT "duties_assignee_id_persons_id_fk" FOREIGN KEY ("assignee_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "duties" ADD CONSTRAINT "duties_closed_by_persons_id_fk" FOREIGN KEY ("closed_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "duties" ADD CONSTRAINT "duties_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "duties" ADD CONSTRAINT "duties_calibration_fk" FOREIGN KEY ("site_id","calibration_id") REFERENCES "public"."calibrations"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "duties" ADD CONSTRAINT "duties_review_fk" FOREIGN KEY ("site_id","review_id") REFERENCES "public"."reviews"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "handovers" ADD CONSTRAINT "handovers_from_id_persons_id_fk" FOREIGN KEY ("from_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "handovers" ADD CONSTRAINT "handovers_to_id_persons_id_fk" FOREIGN KEY ("to_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "handovers" ADD CONSTRAINT "handovers_proposed_by_persons_id_fk" FOREIGN KEY ("proposed_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "handovers" ADD CONSTRAINT "handovers_answered_by_persons_id_fk" FOREIGN KEY ("answered_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "handovers" ADD CONSTRAINT "handovers_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_digest_id_digests_id_fk" FOREIGN KEY ("digest_id") REFERENCES "public"."digests"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_duty_fk" FOREIGN KEY ("site_id","duty_id") REFERENCES "public"."duties"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_calibration_fk" FOREIGN KEY ("site_id","calibration_id") REFERENCES "public"."calibrations"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_revision_fk" FOREIGN KEY ("site_id","revision_id") REFERENCES "public"."revisions"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "notices" ADD CONSTRAINT "notices_handover_fk" FOREIGN KEY ("site_id","handover_id") REFERENCES "public"."handovers"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reviews" ADD CONSTRAINT "reviews_done_by_persons_id_fk" FOREIGN KEY ("done_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reviews" ADD CONSTRAINT "reviews_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "events" ADD CONSTRAINT "events_recorded_by_persons_id_fk" FOREIGN KEY ("recorded_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "events" ADD CONSTRAINT "events_withdrawn_by_persons_id_fk" FOREIGN KEY ("withdrawn_by") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "events" ADD CONSTRAINT "events_unit_fk" FOREIGN KEY ("site_id","unit_id") REFERENCES "public"."units"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "events" ADD CONSTRAINT "events_sensor_fk" FOREIGN KEY ("site_id","soft_sensor_id") REFERENCES "public"."soft_sensors"("site_id","id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "board_looks" ADD CONSTRAINT "board_looks_person_id_persons_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."persons"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE UNIQUE INDEX "calibrations_one_waiting" ON "calibrations" USING btree ("site_id","soft_sensor_id") WHERE "calibrations"."decision" is null;--> statement-breakpoint
CREATE INDEX "calibrations_waiting" ON "calibrations" USING btree ("site_id") WHERE "calibrations"."decision" is null;--> statement-breakpoint
CREATE UNIQUE INDEX "duties_open_key" ON "duties" USING btree ("site_id","soft_sensor_id","kind") WHERE "duties"."state" = 'open';--> statement-breakpoint
CREATE INDEX "duties_due" ON "duties" USING btree ("due_on") WHERE "duties"."state" = 'open';--> statement-breakpoint
CREATE UNIQUE INDEX "handovers_open_key" ON "handovers" USING btree ("site_id","soft_sensor_id","part") WHERE "handovers"."answer" is null;--> statement-breakpoint
CREATE INDEX "handovers_to" ON "handovers" USING btree ("to_id") WHERE "handovers"."answer" is null;--> statement-breakpoint
CREATE INDEX "notices_waiting" ON "notices" USING btree ("person_id") WHERE "notices"."digest_id" is null and "notices"."dropped_at" is null;--> statement-breakpoint
CREATE INDEX "notices_digest" ON "notices" USING btree ("digest_id");--> statement-breakpoint
CREATE INDEX "reviews_sensor" ON "reviews" USING btree ("site_id","soft_sensor_id","done_at");--> statement-breakpoint
CREATE UNIQUE INDEX "events_standing_key" ON "events" USING btree ("site_id",coalesce("unit_id", 0),coalesce("soft_sensor_id", 0),"kind","at") WHERE "events"."withdrawn_at" is null;--> statement-breakpoint
CREATE INDEX "events_unit" ON "events" USING btree ("site_id","unit_id","at");--> statement-breakpoint
CREATE INDEX "events_sensor" ON "events" USING btree ("site_id","soft_sensor_id","at");--> statement-breakpoint
ALTER TABLE "soft_sensors" ADD CONSTRAINT "soft_sensors_intervals" CHECK (("soft_sensors"."recalibration_interval" ->> 'every')::int > 0 and ("soft_sensors"."review_interval" ->> 'every')::int > 0);