-- What drizzle-kit cannot say: ranges that may not overlap, rows that may not change, claims on closed places.
CREATE EXTENSION IF NOT EXISTS btree_gist;
--> statement-breakpoint
ALTER TABLE "shifts" ADD CONSTRAINT "shifts_no_overlap"
  EXCLUDE USING gist ("site_id" WITH =, "rung" WITH =, tstzrange("starts_at", "ends_at") WITH &&);
--> statement-breakpoint
CREATE FUNCTION refuse_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  RAISE EXCEPTION 'rows of % are never changed or deleted', TG_TABLE_NAME USING ERRCODE = '55000';
END $$;
--> statement-breakpoint
DO $$
DECLARE name text;
BEGIN
  FOREACH name IN ARRAY ARRAY['pathway_events', 'escalation_actions', 'message_events', 'missing_steps', 'audit_rows',
    'reviews', 'lens_plans', 'consents', 'operation_notes', 'risk_assessments', 'symptom_checks'] LOOP
    EXECUTE format('CREATE TRIGGER %I BEFORE UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', name || '_append_only', name);
    EXECUTE format('CREATE TRIGGER %I BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', name || '_no_truncate', name);
  END LOOP;
END $$;
--> statement-breakpoint
-- A claim locks its place and session, so that closing one and claiming it cannot both succeed.
CREATE FUNCTION refuse_closed_place() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE place_closed timestamptz; session_closed timestamptz;
BEGIN
  IF NEW.place_id IS NULL OR NEW.state IN ('cancelled', 'moved') THEN RETURN NEW; END IF;
  IF TG_OP = 'UPDATE' AND OLD.place_id IS NOT DISTINCT FROM NEW.place_id AND OLD.state NOT IN ('cancelled', 'moved') THEN RETURN NEW; END IF;
  SELECT p.closed_at, s.closed_at INTO place_closed, session_closed
    FROM session_places p JOIN clinic_sessions s ON s.id = p.session_id WHERE p.id = NEW.place_id FOR SHARE;
  IF place_closed IS NOT NULL OR session_closed IS NOT NULL THEN
    RAISE EXCEPTION 'the place is closed' USING ERRCODE = '23514', CONSTRAINT = 'visits_place_open';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER visits_place_open BEFORE INSERT OR UPDATE ON visits FOR EACH ROW EXECUTE FUNCTION refuse_closed_place();
--> statement-breakpoint
CREATE FUNCTION refuse_lower_urgency() RETURNS trigger LANGUAGE plpgsql AS $$
DECLARE ranks text[] := ARRAY['this-week', 'today', 'now'];
BEGIN
  IF array_position(ranks, NEW.urgency) < array_position(ranks, OLD.urgency) THEN
    RAISE EXCEPTION 'urgency only rises' USING ERRCODE = '23514', CONSTRAINT = 'escalations_urgency_rises';
  END IF;
  IF OLD.state = 'closed' AND NEW.state <> 'closed' THEN
    RAISE EXCEPTION 'a closed escalation stays closed' USING ERRCODE = '23514', CONSTRAINT = 'escalations_stay_closed';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER escalations_urgency_rises BEFORE UPDATE ON escalations FOR EACH ROW EXECUTE FUNCTION refuse_lower_urgency();
--> statement-breakpoint
-- A sent message is never queued again.
CREATE FUNCTION refuse_second_sending() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF OLD.state IN ('sent', 'delivered') AND NEW.state IN ('queued', 'sending', 'held') THEN
    RAISE EXCEPTION 'a sent message is never queued again' USING ERRCODE = '23514', CONSTRAINT = 'messages_sent_once';
  END IF;
  RETURN NEW;
END $$;
--> statement-breakpoint
CREATE TRIGGER messages_sent_once BEFORE UPDATE ON messages FOR EACH ROW EXECUTE FUNCTION refuse_second_sending();
--> statement-breakpoint
INSERT INTO demo_clock (id, offset_seconds) VALUES (1, 0);
--> statement-breakpoint
-- Shared counters of the rate limiter; its library reads and writes this shape.
CREATE TABLE rate_limits (key varchar(255) PRIMARY KEY, points integer NOT NULL DEFAULT 0, expire bigint);
