CREATE TABLE "patient_merges" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"kept_id" uuid NOT NULL,
	"merged_id" uuid NOT NULL,
	"reason" text NOT NULL,
	"before" jsonb NOT NULL,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"undone_by" uuid,
	"undone_at" timestamp with time zone,
	"undo_reason" text,
	CONSTRAINT "patient_merges_two" CHECK ("patient_merges"."kept_id" <> "patient_merges"."merged_id"),
	CONSTRAINT "patient_merges_undone" CHECK (("patient_merges"."undone_at" is null) = ("patient_merges"."undone_by" is null) and ("patient_merges"."undone_at" is null) = ("patient_merges"."undo_reason" is null))
);
--> statement-breakpoint
CREATE TABLE "referral_import_rows" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"import_id" uuid NOT NULL,
	"line" integer NOT NULL,
	"fate" text NOT NULL,
	"data" jsonb,
	"patient_id" uuid,
	"problems" jsonb DEFAULT '[]'::jsonb NOT NULL,
	CONSTRAINT "referral_import_rows_line" UNIQUE("import_id","line"),
	CONSTRAINT "referral_import_rows_fate" CHECK ("referral_import_rows"."fate" in ('new', 'new-pathway', 'duplicate', 'error'))
);
--> statement-breakpoint
CREATE TABLE "referral_imports" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"person_id" uuid NOT NULL,
	"file_name" text NOT NULL,
	"state" text DEFAULT 'checking' NOT NULL,
	"rows_done" integer DEFAULT 0 NOT NULL,
	"fates" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"failed_why" text,
	"started_at" timestamp with time zone NOT NULL,
	"progress_at" timestamp with time zone NOT NULL,
	"committed_at" timestamp with time zone,
	CONSTRAINT "referral_imports_state" CHECK ("referral_imports"."state" in ('checking', 'checked', 'committed', 'failed'))
);
--> statement-breakpoint
ALTER TABLE "messages" DROP CONSTRAINT "messages_kind";--> statement-breakpoint
ALTER TABLE "escalations" DROP CONSTRAINT "escalations_same_patient";
--> statement-breakpoint
ALTER TABLE "visits" DROP CONSTRAINT "visits_same_patient";
--> statement-breakpoint
ALTER TABLE "messages" DROP CONSTRAINT "messages_same_patient";
--> statement-breakpoint
ALTER TABLE "symptom_checks" DROP CONSTRAINT "symptom_checks_same_patient";
--> statement-breakpoint
ALTER TABLE "patients" ADD COLUMN "merged_into_id" uuid;--> statement-breakpoint
ALTER TABLE "patient_merges" ADD CONSTRAINT "patient_merges_kept_id_patients_id_fk" FOREIGN KEY ("kept_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_merges" ADD CONSTRAINT "patient_merges_merged_id_patients_id_fk" FOREIGN KEY ("merged_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_merges" ADD CONSTRAINT "patient_merges_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_merges" ADD CONSTRAINT "patient_merges_undone_by_people_id_fk" FOREIGN KEY ("undone_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referral_import_rows" ADD CONSTRAINT "referral_import_rows_import_id_referral_imports_id_fk" FOREIGN KEY ("import_id") REFERENCES "public"."referral_imports"("id") ON DELETE cascade ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referral_import_rows" ADD CONSTRAINT "referral_import_rows_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referral_imports" ADD CONSTRAINT "referral_imports_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referral_imports" ADD CONSTRAINT "referral_imports_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "patient_merges_kept" ON "patient_merges" USING btree ("kept_id");--> statement-breakpoint
CREATE INDEX "patient_merges_merged" ON "patient_merges" USING btree ("merged_id");--> statement-breakpoint
CREATE INDEX "referral_imports_of" ON "referral_imports" USING btree ("site_id","started_at");--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE cascade;--> statement-breakpoint
ALTER TABLE "patients" ADD CONSTRAINT "patients_merged_into_id_patients_id_fk" FOREIGN KEY ("merged_into_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE cascade;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE cascade;--> statement-breakpoint
ALTER TABLE "symptom_checks" ADD CONSTRAINT "symptom_checks_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE cascade;--> statement-breakpoint
CREATE INDEX "attachments_of" ON "attachments" USING btree ("pathway_id","added_at");--> statement-breakpoint
CREATE INDEX "pathways_waiting" ON "pathways" USING btree ("referred_at","id") WHERE stage = 'referral' and state <> 'closed';--> statement-breakpoint
CREATE INDEX "patients_name_birth" ON "patients" USING btree (lower("name"),"birth_date");--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_kind" CHECK ("messages"."kind" in ('surgery.reminder', 'dayone.evening', 'dayone.morning', 'visit.reminder', 'visit.changed', 'visit.cancelled', 'safety.day3', 'safety.day7', 'drops.change', 'missing.patient', 'alert.surgeon', 'alert.rung', 'letter.sent', 'answer.confirmed', 'answer.cannot-come', 'answer.worried', 'answer.which', 'answer.stopped', 'answer.started', 'answer.received', 'account.reset', 'reply.hand', 'alert.answer', 'referral.question'));--> statement-breakpoint
-- What a patient answered is never changed. When two records of one person become one, the answers follow their pathway by the
-- cascade of its key, and by nothing else: the cascade runs inside a trigger, a statement of the application does not.
CREATE FUNCTION refuse_change_but_follow() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP = 'UPDATE' AND pg_trigger_depth() > 1 AND to_jsonb(NEW) - 'patient_id' = to_jsonb(OLD) - 'patient_id' THEN RETURN NEW; END IF;
  RAISE EXCEPTION 'rows of % are never changed or deleted', TG_TABLE_NAME USING ERRCODE = '55000';
END $$;
--> statement-breakpoint
DROP TRIGGER symptom_checks_append_only ON symptom_checks;
--> statement-breakpoint
CREATE TRIGGER symptom_checks_append_only BEFORE UPDATE OR DELETE ON symptom_checks FOR EACH ROW EXECUTE FUNCTION refuse_change_but_follow();
--> statement-breakpoint
-- A merge is taken back once; what it was before is never rewritten.
CREATE FUNCTION refuse_merge_change() RETURNS trigger LANGUAGE plpgsql AS $$
BEGIN
  IF TG_OP = 'UPDATE' AND OLD.undone_at IS NULL AND to_jsonb(NEW) - ARRAY['undone_at', 'undone_by', 'undo_reason'] = to_jsonb(OLD) - ARRAY['undone_at', 'undone_by', 'undo_reason'] THEN RETURN NEW; END IF;
  RAISE EXCEPTION 'a signed merge is never changed' USING ERRCODE = '55000';
END $$;
--> statement-breakpoint
CREATE TRIGGER patient_merges_signed BEFORE UPDATE OR DELETE ON patient_merges FOR EACH ROW EXECUTE FUNCTION refuse_merge_change();
