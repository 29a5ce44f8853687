-- A calibration is decided once, and entered in a control system once; as found and as left are never rewritten.
CREATE FUNCTION freeze_decided_calibration() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
	decision_columns text[] := ARRAY['decision', 'decided_at', 'decided_by', 'decision_reason', 'effective_from'];
	entry_columns text[] := ARRAY['entered_by', 'entered_at', 'entered_recorded_by', 'entered_recorded_at', 'effective_from'];
BEGIN
	IF TG_OP = 'UPDATE' AND OLD.decision IS NULL AND to_jsonb(NEW) - decision_columns = to_jsonb(OLD) - decision_columns THEN
		RETURN NEW;
	END IF;
	IF TG_OP = 'UPDATE' AND OLD.decision = 'approved' AND OLD.to_be_entered AND OLD.entered_at IS NULL
			AND to_jsonb(NEW) - entry_columns = to_jsonb(OLD) - entry_columns THEN
		RETURN NEW;
	END IF;
	RAISE EXCEPTION 'a calibration is immutable, decided once and entered once' USING ERRCODE = 'restrict_violation';
END $$;--> statement-breakpoint
CREATE TRIGGER calibrations_frozen BEFORE UPDATE OR DELETE ON "calibrations" FOR EACH ROW EXECUTE FUNCTION freeze_decided_calibration();--> statement-breakpoint

CREATE FUNCTION freeze_answered_handover() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE
	answer_columns text[] := ARRAY['answer', 'answered_at', 'answered_by', 'answer_reason'];
BEGIN
	IF TG_OP = 'DELETE' OR OLD.answer IS NOT NULL OR to_jsonb(NEW) - answer_columns <> to_jsonb(OLD) - answer_columns THEN
		RAISE EXCEPTION 'a handover is immutable and answered once' USING ERRCODE = 'restrict_violation';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER handovers_frozen BEFORE UPDATE OR DELETE ON "handovers" FOR EACH ROW EXECUTE FUNCTION freeze_answered_handover();--> statement-breakpoint

CREATE TRIGGER reviews_frozen BEFORE UPDATE OR DELETE ON "reviews" FOR EACH ROW EXECUTE FUNCTION refuse_change();--> statement-breakpoint
CREATE TRIGGER events_frozen BEFORE UPDATE OR DELETE ON "events" FOR EACH ROW EXECUTE FUNCTION freeze_except('withdrawn_at', 'withdrawn_by', 'withdrawn_reason');--> statement-breakpoint
CREATE TRIGGER notices_frozen BEFORE UPDATE OR DELETE ON "notices" FOR EACH ROW EXECUTE FUNCTION freeze_except('digest_id', 'dropped_at');--> statement-breakpoint

CREATE FUNCTION freeze_closed_duty() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF TG_OP = 'DELETE' OR OLD.state <> 'open' OR NEW.kind <> OLD.kind OR NEW.soft_sensor_id <> OLD.soft_sensor_id THEN
		RAISE EXCEPTION 'a closed duty is never opened, changed or removed' USING ERRCODE = 'restrict_violation';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
CREATE TRIGGER duties_frozen BEFORE UPDATE OR DELETE ON "duties" FOR EACH ROW EXECUTE FUNCTION freeze_closed_duty();--> statement-breakpoint

-- Whoever suspends a soft sensor at once may say why afterwards: an empty reason is filled, a given one stays.
CREATE FUNCTION fill_reason_once() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
	IF TG_OP = 'DELETE' OR OLD.reason <> '' OR to_jsonb(NEW) - 'reason' <> to_jsonb(OLD) - 'reason' THEN
		RAISE EXCEPTION 'rows of life_states are frozen' USING ERRCODE = 'restrict_violation';
	END IF;
	RETURN NEW;
END $$;--> statement-breakpoint
DROP TRIGGER life_states_frozen ON "life_states";--> statement-breakpoint
CREATE TRIGGER life_states_frozen BEFORE UPDATE OR DELETE ON "life_states" FOR EACH ROW EXECUTE FUNCTION fill_reason_once();--> statement-breakpoint

-- A calibration belongs to a revision: it ends with the next calibration or the next revision, which starts uncorrected.
CREATE VIEW "calibrations_in_force" AS
	SELECT c.*, least(
		lead(c.effective_from) OVER (PARTITION BY c.site_id, c.soft_sensor_id ORDER BY c.effective_from),
		(SELECT min(r.effective_from) FROM "revisions" r WHERE r.site_id = c.site_id AND r.soft_sensor_id = c.soft_sensor_id
			AND r.effective_from > c.effective_from)) AS effective_to
	FROM "calibrations" c WHERE c.effective_from IS NOT NULL;--> statement-breakpoint

-- Stops and starts of a unit, or of one soft sensor by itself, as periods; a turnaround stops as a stop does.
CREATE VIEW "stoppages" AS
	SELECT site_id, unit_id, soft_sensor_id, stopped_at, min(started_at) AS started_at FROM (
		SELECT s.site_id, s.unit_id, s.soft_sensor_id, s.at AS stopped_at,
			(SELECT min(b.at) FROM "events" b WHERE b.site_id = s.site_id AND b.unit_id IS NOT DISTINCT FROM s.unit_id
				AND b.soft_sensor_id IS NOT DISTINCT FROM s.soft_sensor_id
				AND b.kind = 'start' AND b.withdrawn_at IS NULL AND b.at > s.at) AS started_at
		FROM "events" s WHERE s.kind IN ('stop', 'turnaround') AND s.withdrawn_at IS NULL
	) p GROUP BY site_id, unit_id, soft_sensor_id, stopped_at;
