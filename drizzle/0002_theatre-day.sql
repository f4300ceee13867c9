CREATE TABLE "lens_labels" (
	"gtin" text PRIMARY KEY NOT NULL,
	"model" text NOT NULL,
	"power_d" double precision NOT NULL,
	CONSTRAINT "lens_labels_gtin" CHECK ("lens_labels"."gtin" ~ '^[0-9]{14}$'),
	CONSTRAINT "lens_labels_power" CHECK ("lens_labels"."power_d" between -20 and 60)
);
--> statement-breakpoint
CREATE TABLE "lens_scans" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"case_id" uuid NOT NULL,
	"source" text NOT NULL,
	"label" text,
	"gtin" text,
	"lot" text,
	"serial" text,
	"expires_on" date,
	"model" text,
	"power_d" double precision,
	"planned_model" text,
	"planned_power_d" double precision,
	"reasons" jsonb NOT NULL,
	"scanned_by" uuid NOT NULL,
	"scanned_at" timestamp with time zone NOT NULL,
	CONSTRAINT "lens_scans_source" CHECK ("lens_scans"."source" in ('scanned', 'typed'))
);
--> statement-breakpoint
CREATE TABLE "safety_explanations" (
	"stop_id" uuid PRIMARY KEY NOT NULL,
	"words" text NOT NULL,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "safety_steps" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"case_id" uuid NOT NULL,
	"step" text NOT NULL,
	"answers" jsonb NOT NULL,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	CONSTRAINT "safety_steps_once" UNIQUE("case_id","step"),
	CONSTRAINT "safety_steps_step" CHECK ("safety_steps"."step" in ('before-anaesthesia', 'before-incision', 'before-leaving'))
);
--> statement-breakpoint
CREATE TABLE "safety_stops" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"case_id" uuid NOT NULL,
	"step" text NOT NULL,
	"scan_id" uuid,
	"reasons" jsonb NOT NULL,
	"raised_by" uuid NOT NULL,
	"raised_at" timestamp with time zone NOT NULL,
	CONSTRAINT "safety_stops_step" CHECK ("safety_stops"."step" in ('before-anaesthesia', 'before-incision', 'before-leaving')),
	CONSTRAINT "safety_stops_reasons" CHECK (jsonb_array_length("safety_stops"."reasons") > 0)
);
--> statement-breakpoint
CREATE TABLE "theatre_list_changes" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"list_id" uuid NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"person_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"words" text NOT NULL,
	"reason" text,
	"after_lock" boolean NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL,
	CONSTRAINT "theatre_list_changes_kind" CHECK ("theatre_list_changes"."kind" in ('made', 'added', 'cancelled', 'replaced', 'ordered', 'constraints', 'locked', 'unlocked'))
);
--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD COLUMN "minutes_by_hand" boolean DEFAULT false NOT NULL;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD COLUMN "constraints" jsonb DEFAULT '{}'::jsonb NOT NULL;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD COLUMN "started_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD COLUMN "ended_at" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD COLUMN "locked_by" uuid;--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD COLUMN "anaesthetist_from" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD COLUMN "anaesthetist_to" timestamp with time zone;--> statement-breakpoint
ALTER TABLE "lens_scans" ADD CONSTRAINT "lens_scans_case_id_theatre_cases_id_fk" FOREIGN KEY ("case_id") REFERENCES "public"."theatre_cases"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lens_scans" ADD CONSTRAINT "lens_scans_scanned_by_people_id_fk" FOREIGN KEY ("scanned_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_explanations" ADD CONSTRAINT "safety_explanations_stop_id_safety_stops_id_fk" FOREIGN KEY ("stop_id") REFERENCES "public"."safety_stops"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_explanations" ADD CONSTRAINT "safety_explanations_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_steps" ADD CONSTRAINT "safety_steps_case_id_theatre_cases_id_fk" FOREIGN KEY ("case_id") REFERENCES "public"."theatre_cases"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_steps" ADD CONSTRAINT "safety_steps_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_stops" ADD CONSTRAINT "safety_stops_case_id_theatre_cases_id_fk" FOREIGN KEY ("case_id") REFERENCES "public"."theatre_cases"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_stops" ADD CONSTRAINT "safety_stops_scan_id_lens_scans_id_fk" FOREIGN KEY ("scan_id") REFERENCES "public"."lens_scans"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "safety_stops" ADD CONSTRAINT "safety_stops_raised_by_people_id_fk" FOREIGN KEY ("raised_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_list_changes" ADD CONSTRAINT "theatre_list_changes_list_id_theatre_lists_id_fk" FOREIGN KEY ("list_id") REFERENCES "public"."theatre_lists"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_list_changes" ADD CONSTRAINT "theatre_list_changes_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "lens_scans_of" ON "lens_scans" USING btree ("case_id","scanned_at");--> statement-breakpoint
CREATE INDEX "safety_stops_of" ON "safety_stops" USING btree ("case_id","raised_at");--> statement-breakpoint
CREATE INDEX "theatre_list_changes_of" ON "theatre_list_changes" USING btree ("list_id","at");--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD CONSTRAINT "theatre_lists_locked_by_people_id_fk" FOREIGN KEY ("locked_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD CONSTRAINT "theatre_cases_span" CHECK ("theatre_cases"."ended_at" is null or ("theatre_cases"."started_at" is not null and "theatre_cases"."ended_at" >= "theatre_cases"."started_at"));--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD CONSTRAINT "theatre_lists_locked" CHECK (("theatre_lists"."locked_at" is null) = ("theatre_lists"."locked_by" is null));--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD CONSTRAINT "theatre_lists_anaesthetist" CHECK (("theatre_lists"."anaesthetist_from" is null) = ("theatre_lists"."anaesthetist_to" is null) and ("theatre_lists"."anaesthetist_from" is null or "theatre_lists"."anaesthetist_to" > "theatre_lists"."anaesthetist_from"));--> statement-breakpoint
-- What was answered, held up or explained in theatre, and what happened to a list, stays as it was.
DO $$
DECLARE name text;
BEGIN
  FOREACH name IN ARRAY ARRAY['theatre_list_changes', 'safety_steps', 'lens_scans', 'safety_stops', 'safety_explanations'] LOOP
    EXECUTE format('CREATE TRIGGER %I BEFORE UPDATE OR DELETE ON %I FOR EACH ROW EXECUTE FUNCTION refuse_change()', name || '_append_only', name);
    EXECUTE format('CREATE TRIGGER %I BEFORE TRUNCATE ON %I FOR EACH STATEMENT EXECUTE FUNCTION refuse_change()', name || '_no_truncate', name);
  END LOOP;
END $$;
