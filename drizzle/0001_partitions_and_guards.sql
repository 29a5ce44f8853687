-- Readings and their hourly roll-up are partitioned by month (UTC). Partitions are made by whoever imports, past months
-- too; there is no default partition, so that nothing hides in it.
DROP TABLE "readings";--> statement-breakpoint
CREATE TABLE "readings" (
	"site_id" integer NOT NULL,
	"tag_id" integer NOT NULL,
	"at" timestamp (3) with time zone NOT NULL,
	"value" double precision NOT NULL,
	"sd" double precision,
	"quality" smallint DEFAULT 0 NOT NULL,
	CONSTRAINT "readings_pkey" PRIMARY KEY("site_id","tag_id","at"),
	CONSTRAINT "readings_finite" CHECK ("value" > '-Infinity' AND "value" < 'Infinity'),
	CONSTRAINT "readings_quality" CHECK ("quality" BETWEEN 0 AND 2)
) PARTITION BY RANGE ("at");--> statement-breakpoint
DROP TABLE "reading_hours";--> statement-breakpoint
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
) PARTITION BY RANGE ("hour");--> statement-breakpoint

-- CREATE TABLE (LIKE) and ATTACH: measured, CREATE TABLE … PARTITION OF blocks every reader until commit.
CREATE FUNCTION ensure_month_partition(month date) RETURNS void LANGUAGE plpgsql AS $$
DECLARE
	parent text;
	child text;
	lower_end timestamptz := date_trunc('month', month)::timestamp AT TIME ZONE 'UTC';
	upper_end timestamptz := (date_trunc('month', month) + interval '1 month')::timestamp AT TIME ZONE 'UTC';
BEGIN
	FOREACH parent IN ARRAY ARRAY['readings', 'reading_hours'] LOOP
		child := parent || to_char(month, '_YYYY_MM');
		CONTINUE WHEN to_regclass(child) IS NOT NULL;
		EXECUTE format('CREATE TABLE %I (LIKE %I INCLUDING ALL)', child, parent);
		EXECUTE format('ALTER TABLE %I ATTACH PARTITION %I FOR VALUES FROM (%L) TO (%L)', parent, child, lower_end, upper_end);
	END LOOP;
END $$;--> statement-breakpoint

-- What the trail says stays said.
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	RAISE EXCEPTION 'rows of % are never changed or removed', TG_TABLE_NAME USING ERRCODE = 'restrict_violation';
END $$;--> statement-breakpoint
CREATE TRIGGER audit_entries_immutable BEFORE UPDATE OR DELETE ON "audit_entries" FOR EACH ROW EXECUTE FUNCTION refuse_change();--> statement-breakpoint
CREATE TRIGGER audit_entries_kept BEFORE TRUNCATE ON "audit_entries" FOR EACH STATEMENT EXECUTE FUNCTION refuse_change();--> statement-breakpoint

-- The named columns may be set later; everything else in the row is frozen, and the row is never deleted.
CREATE FUNCTION freeze_except() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF TG_OP = 'DELETE' OR to_jsonb(NEW) - TG_ARGV <> to_jsonb(OLD) - TG_ARGV THEN
		RAISE EXCEPTION 'rows of % are frozen', TG_TABLE_NAME USING ERRCODE = 'restrict_violation';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER samples_frozen BEFORE UPDATE OR DELETE ON "samples" FOR EACH ROW EXECUTE FUNCTION freeze_except('held_since', 'superseded_at', 'withdrawn_at', 'flags');--> statement-breakpoint
CREATE TRIGGER pairs_frozen BEFORE UPDATE OR DELETE ON "pairs" FOR EACH ROW EXECUTE FUNCTION freeze_except('superseded_at');--> statement-breakpoint
CREATE TRIGGER ownerships_frozen BEFORE UPDATE OR DELETE ON "ownerships" FOR EACH ROW EXECUTE FUNCTION refuse_change();--> statement-breakpoint
CREATE TRIGGER life_states_frozen BEFORE UPDATE OR DELETE ON "life_states" FOR EACH ROW EXECUTE FUNCTION refuse_change();--> statement-breakpoint

CREATE FUNCTION freeze_decided_revision() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
	decision_columns text[] := ARRAY['decision', 'decided_at', 'decided_by', 'decision_reason', 'effective_from'];
BEGIN
	IF TG_OP = 'DELETE' OR OLD.decision IS NOT NULL OR to_jsonb(NEW) - decision_columns <> to_jsonb(OLD) - decision_columns THEN
		RAISE EXCEPTION 'a revision is immutable and decided once' USING ERRCODE = 'restrict_violation';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER revisions_frozen BEFORE UPDATE OR DELETE ON "revisions" FOR EACH ROW EXECUTE FUNCTION freeze_decided_revision();--> statement-breakpoint

-- One waiting proposal a soft sensor: two at once would leave it open which one was judged.
CREATE UNIQUE INDEX "revisions_one_waiting" ON "revisions" ("site_id", "soft_sensor_id") WHERE "decision" IS NULL;--> statement-breakpoint

-- What is in force at an instant: each row ends where the next begins.
CREATE VIEW "revisions_in_force" AS
	SELECT r.*, lead(r.effective_from) OVER (PARTITION BY r.site_id, r.soft_sensor_id ORDER BY r.effective_from) AS effective_to
	FROM "revisions" r WHERE r.decision = 'approved';--> statement-breakpoint
CREATE VIEW "current_ownerships" AS
	SELECT DISTINCT ON (site_id, soft_sensor_id) * FROM "ownerships" ORDER BY site_id, soft_sensor_id, effective_from DESC;--> statement-breakpoint
CREATE VIEW "current_life_states" AS
	SELECT DISTINCT ON (site_id, soft_sensor_id) * FROM "life_states" ORDER BY site_id, soft_sensor_id, effective_from DESC;
