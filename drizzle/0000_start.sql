CREATE TABLE "audit_rows" (
	"id" bigserial PRIMARY KEY NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"event" text NOT NULL,
	"person_id" uuid,
	"subject_kind" text NOT NULL,
	"subject_id" text NOT NULL,
	"site_id" uuid,
	"payload" jsonb DEFAULT '{}'::jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "biometries" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"axial_length_mm" double precision NOT NULL,
	"axial_length_sd_mm" double precision,
	"k1_d" double precision NOT NULL,
	"k1_axis_degrees" double precision NOT NULL,
	"k2_d" double precision NOT NULL,
	"k2_axis_degrees" double precision NOT NULL,
	"anterior_chamber_depth_mm" double precision,
	"lens_thickness_mm" double precision,
	"white_to_white_mm" double precision,
	"cct_um" double precision,
	"endothelial_cells_per_mm2" double precision,
	"preoperative_log_mar" double precision,
	"preoperative_acuity_entered" text,
	"preoperative_iop_mmhg" double precision,
	"source" text DEFAULT 'typed' NOT NULL,
	"warnings" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"explanations" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"measured_by" uuid NOT NULL,
	"measured_at" timestamp with time zone NOT NULL,
	"accepted_by" uuid,
	"accepted_at" timestamp with time zone,
	CONSTRAINT "biometries_version" UNIQUE("pathway_id","version"),
	CONSTRAINT "biometries_axial_length" CHECK ("biometries"."axial_length_mm" between 14 and 40),
	CONSTRAINT "biometries_k" CHECK ("biometries"."k1_d" between 20 and 70 and "biometries"."k2_d" between 20 and 70),
	CONSTRAINT "biometries_axes" CHECK ("biometries"."k1_axis_degrees" between 0 and 180 and "biometries"."k2_axis_degrees" between 0 and 180)
);
--> statement-breakpoint
CREATE TABLE "lens_plans" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"biometry_id" uuid NOT NULL,
	"model" text NOT NULL,
	"power_d" double precision NOT NULL,
	"target_d" double precision NOT NULL,
	"predicted_d" double precision NOT NULL,
	"second_check" jsonb,
	"second_check_agrees" text NOT NULL,
	"difference_explained" text,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"amend_reason" text,
	CONSTRAINT "lens_plans_version" UNIQUE("pathway_id","version"),
	CONSTRAINT "lens_plans_amendment" CHECK ("lens_plans"."version" = 1 or "lens_plans"."amend_reason" is not null),
	CONSTRAINT "lens_plans_power" CHECK ("lens_plans"."power_d" between -20 and 60),
	CONSTRAINT "lens_plans_explained" CHECK ("lens_plans"."second_check_agrees" = 'agrees' or "lens_plans"."difference_explained" is not null)
);
--> statement-breakpoint
CREATE TABLE "escalation_actions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"escalation_id" uuid NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"kind" text NOT NULL,
	"person_id" uuid,
	"words" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "escalations" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"number" serial NOT NULL,
	"pathway_id" uuid NOT NULL,
	"patient_id" uuid NOT NULL,
	"site_id" uuid NOT NULL,
	"urgency" text NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"reasons" jsonb NOT NULL,
	"raised_at" timestamp with time zone NOT NULL,
	"raised_by" uuid,
	"answer_by" timestamp with time zone NOT NULL,
	"surgeon_id" uuid,
	"rung" integer DEFAULT 1 NOT NULL,
	"next_rung_at" timestamp with time zone,
	"alerted_at" timestamp with time zone,
	"acknowledged_by" uuid,
	"acknowledged_at" timestamp with time zone,
	"plan" text,
	"closed_by" uuid,
	"closed_at" timestamp with time zone,
	"closing_words" text,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "escalations_number_unique" UNIQUE("number"),
	CONSTRAINT "escalations_urgency" CHECK ("escalations"."urgency" in ('now', 'today', 'this-week')),
	CONSTRAINT "escalations_state" CHECK ("escalations"."state" in ('open', 'acknowledged', 'closed')),
	CONSTRAINT "escalations_acknowledged" CHECK ("escalations"."state" <> 'acknowledged' or ("escalations"."acknowledged_by" is not null and "escalations"."acknowledged_at" is not null)),
	CONSTRAINT "escalations_closed" CHECK ("escalations"."state" <> 'closed' or ("escalations"."closed_at" is not null and length(trim("escalations"."closing_words")) > 0))
);
--> statement-breakpoint
CREATE TABLE "shifts" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"rung" integer NOT NULL,
	"person_id" uuid NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	CONSTRAINT "shifts_span" CHECK ("shifts"."ends_at" > "shifts"."starts_at"),
	CONSTRAINT "shifts_rung" CHECK ("shifts"."rung" between 1 and 3)
);
--> statement-breakpoint
CREATE TABLE "demo_clock" (
	"id" integer PRIMARY KEY DEFAULT 1 NOT NULL,
	"offset_seconds" integer DEFAULT 0 NOT NULL,
	CONSTRAINT "demo_clock_one" CHECK ("demo_clock"."id" = 1)
);
--> statement-breakpoint
CREATE TABLE "password_resets" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person_id" uuid NOT NULL,
	"token_hash" text NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"used_at" timestamp with time zone,
	CONSTRAINT "password_resets_token_hash_unique" UNIQUE("token_hash")
);
--> statement-breakpoint
CREATE TABLE "people" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"title" text NOT NULL,
	"email" text NOT NULL,
	"phone" text,
	"password_hash" text,
	"disabled_at" timestamp with time zone,
	"failed_tries" integer DEFAULT 0 NOT NULL,
	"locked_until" timestamp with time zone,
	"single_keys_off" boolean DEFAULT false NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "practices" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"name" text NOT NULL,
	"phone" text NOT NULL,
	"address" text NOT NULL
);
--> statement-breakpoint
CREATE TABLE "roles" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"person_id" uuid NOT NULL,
	"role" text NOT NULL,
	"site_id" uuid,
	"practice_id" uuid,
	CONSTRAINT "roles_role" CHECK ("roles"."role" in ('coordinator', 'nurse', 'optometrist', 'surgeon', 'clinical-lead', 'administrator')),
	CONSTRAINT "roles_one_place" CHECK (num_nonnulls("roles"."site_id", "roles"."practice_id") = 1),
	CONSTRAINT "roles_practice_is_optometrist" CHECK ("roles"."practice_id" is null or "roles"."role" = 'optometrist')
);
--> statement-breakpoint
CREATE TABLE "sessions" (
	"id_hash" text PRIMARY KEY NOT NULL,
	"person_id" uuid NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"last_seen_at" timestamp with time zone NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"revoked_at" timestamp with time zone,
	"user_agent" text DEFAULT '' NOT NULL
);
--> statement-breakpoint
CREATE TABLE "sites" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"code" text NOT NULL,
	"name" text NOT NULL,
	"zone" text NOT NULL,
	"phone" text NOT NULL,
	"emergency_phone" text NOT NULL,
	"address" text NOT NULL,
	"directions" text NOT NULL,
	"is_hospital" boolean NOT NULL,
	"settings" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "sites_code_unique" UNIQUE("code")
);
--> statement-breakpoint
CREATE TABLE "attachments" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"patient_id" uuid NOT NULL,
	"pathway_id" uuid,
	"name" text NOT NULL,
	"media_type" text NOT NULL,
	"bytes" integer NOT NULL,
	"sha256" text NOT NULL,
	"stored_as" text NOT NULL,
	"added_by" uuid,
	"added_at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
CREATE TABLE "pathway_events" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"kind" text NOT NULL,
	"from_stage" text,
	"to_stage" text,
	"person_id" uuid,
	"words" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "pathways" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"patient_id" uuid NOT NULL,
	"eye" text NOT NULL,
	"site_id" uuid NOT NULL,
	"surgeon_id" uuid,
	"practice_id" uuid,
	"stage" text DEFAULT 'referral' NOT NULL,
	"state" text DEFAULT 'open' NOT NULL,
	"hold_reason" text,
	"look_again_on" date,
	"close_reason" text,
	"priority" text DEFAULT 'routine' NOT NULL,
	"referred_at" timestamp with time zone NOT NULL,
	"biometry_at" timestamp with time zone,
	"surgery_at" timestamp with time zone,
	"operated_at" timestamp with time zone,
	"day_one_at" timestamp with time zone,
	"follow_up_at" timestamp with time zone,
	"discharged_at" timestamp with time zone,
	"other_first_check" text,
	"day_one_need" jsonb,
	"fellow_eye_decision" text,
	"stage_since" timestamp with time zone NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "pathways_of_patient" UNIQUE("id","patient_id"),
	CONSTRAINT "pathways_eye" CHECK ("pathways"."eye" in ('right', 'left')),
	CONSTRAINT "pathways_stage" CHECK ("pathways"."stage" in ('referral', 'biometry', 'surgery', 'day-one', 'follow-up', 'discharge')),
	CONSTRAINT "pathways_state" CHECK ("pathways"."state" in ('open', 'held', 'closed')),
	CONSTRAINT "pathways_priority" CHECK ("pathways"."priority" in ('routine', 'soon', 'urgent')),
	CONSTRAINT "pathways_closed_has_reason" CHECK (("pathways"."state" = 'closed') = ("pathways"."close_reason" is not null)),
	CONSTRAINT "pathways_held_has_reason" CHECK ("pathways"."state" <> 'held' or ("pathways"."hold_reason" is not null and "pathways"."look_again_on" is not null))
);
--> statement-breakpoint
CREATE TABLE "patients" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"record_number" text NOT NULL,
	"name" text NOT NULL,
	"birth_date" date NOT NULL,
	"identifier" text,
	"phone" text,
	"email" text,
	"address" text DEFAULT '' NOT NULL,
	"language" text DEFAULT 'en' NOT NULL,
	"preferred_channel" text DEFAULT 'text' NOT NULL,
	"message_consent" boolean,
	"wants_detail" boolean DEFAULT false NOT NULL,
	"wants_drops_reminders" boolean DEFAULT false NOT NULL,
	"needs_transport" boolean DEFAULT false NOT NULL,
	"interpreter_language" text,
	"carer" jsonb,
	"alerts" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"risk_reasons" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"number_confirmed_at" timestamp with time zone,
	"texts_stopped_at" timestamp with time zone,
	"died_on" date,
	"site_id" uuid NOT NULL,
	"created_at" timestamp with time zone NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "patients_record_number_unique" UNIQUE("record_number"),
	CONSTRAINT "patients_identifier_unique" UNIQUE("identifier"),
	CONSTRAINT "patients_channel" CHECK ("patients"."preferred_channel" in ('text', 'email', 'call')),
	CONSTRAINT "patients_name" CHECK (length(trim("patients"."name")) > 0)
);
--> statement-breakpoint
CREATE TABLE "referrals" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"referrer" text NOT NULL,
	"referrer_email" text,
	"source" text DEFAULT 'form' NOT NULL,
	"reason" text NOT NULL,
	"vision_right" text,
	"vision_left" text,
	"red_flags" jsonb DEFAULT '{}'::jsonb NOT NULL,
	"triage_decision" text,
	"triage_note" text,
	"triaged_by" uuid,
	"triaged_at" timestamp with time zone,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "referrals_pathway_id_unique" UNIQUE("pathway_id"),
	CONSTRAINT "referrals_decision" CHECK ("referrals"."triage_decision" is null or "referrals"."triage_decision" in ('accepted', 'returned', 'declined'))
);
--> statement-breakpoint
CREATE TABLE "consents" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"discussed" text NOT NULL,
	"risk_figure_percent" double precision,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"amend_reason" text,
	CONSTRAINT "consents_version" UNIQUE("pathway_id","version"),
	CONSTRAINT "consents_amendment" CHECK ("consents"."version" = 1 or "consents"."amend_reason" is not null)
);
--> statement-breakpoint
CREATE TABLE "operation_notes" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"case_id" uuid,
	"version" integer NOT NULL,
	"operated_at" timestamp with time zone NOT NULL,
	"anaesthesia" text NOT NULL,
	"incision" text NOT NULL,
	"wound_clock_hour" integer,
	"capsulorhexis_mm" double precision,
	"technique" text NOT NULL,
	"viscoelastics" text DEFAULT '' NOT NULL,
	"energy_percent_seconds" double precision,
	"ultrasound_seconds" double precision,
	"nuclear_density" text,
	"complications" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"complication_words" text DEFAULT '' NOT NULL,
	"lens_model" text NOT NULL,
	"lens_power_d" double precision NOT NULL,
	"lens_deviation_explained" text,
	"lens_as_planned" boolean NOT NULL,
	"drops" jsonb NOT NULL,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"amend_reason" text,
	CONSTRAINT "operation_notes_version" UNIQUE("pathway_id","version"),
	CONSTRAINT "operation_notes_amendment" CHECK ("operation_notes"."version" = 1 or "operation_notes"."amend_reason" is not null),
	CONSTRAINT "operation_notes_hour" CHECK ("operation_notes"."wound_clock_hour" is null or "operation_notes"."wound_clock_hour" between 1 and 12)
);
--> statement-breakpoint
CREATE TABLE "risk_assessments" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"factors" jsonb NOT NULL,
	"result" jsonb NOT NULL,
	"assessed_by" uuid NOT NULL,
	"assessed_at" timestamp with time zone NOT NULL,
	CONSTRAINT "risk_assessments_version" UNIQUE("pathway_id","version")
);
--> statement-breakpoint
CREATE TABLE "theatre_cases" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"list_id" uuid NOT NULL,
	"pathway_id" uuid NOT NULL,
	"position" integer NOT NULL,
	"planned_minutes" integer NOT NULL,
	"state" text DEFAULT 'planned' NOT NULL,
	"cancel_reason" text,
	CONSTRAINT "theatre_cases_state" CHECK ("theatre_cases"."state" in ('planned', 'in-theatre', 'done', 'cancelled')),
	CONSTRAINT "theatre_cases_cancelled" CHECK (("theatre_cases"."state" = 'cancelled') = ("theatre_cases"."cancel_reason" is not null))
);
--> statement-breakpoint
CREATE TABLE "theatre_lists" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"surgeon_id" uuid NOT NULL,
	"room" text NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"locked_at" timestamp with time zone,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "theatre_lists_span" CHECK ("theatre_lists"."ends_at" > "theatre_lists"."starts_at")
);
--> statement-breakpoint
CREATE TABLE "clinic_sessions" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"site_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"room" text NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"ends_at" timestamp with time zone NOT NULL,
	"closed_at" timestamp with time zone,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "clinic_sessions_kind" CHECK ("clinic_sessions"."kind" in ('day-one', 'follow-up')),
	CONSTRAINT "clinic_sessions_span" CHECK ("clinic_sessions"."ends_at" > "clinic_sessions"."starts_at")
);
--> statement-breakpoint
CREATE TABLE "missing_steps" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"visit_id" uuid NOT NULL,
	"step" text NOT NULL,
	"outcome" text NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"person_id" uuid
);
--> statement-breakpoint
CREATE TABLE "review_drafts" (
	"visit_id" uuid PRIMARY KEY NOT NULL,
	"person_id" uuid NOT NULL,
	"findings" jsonb NOT NULL,
	"saved_at" timestamp with time zone NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL
);
--> statement-breakpoint
CREATE TABLE "reviews" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"visit_id" uuid NOT NULL,
	"pathway_id" uuid NOT NULL,
	"version" integer NOT NULL,
	"findings" jsonb NOT NULL,
	"reasons" jsonb NOT NULL,
	"unchecked" jsonb DEFAULT '[]'::jsonb NOT NULL,
	"rules_version" text NOT NULL,
	"best_log_mar" double precision,
	"iop_mmhg" double precision,
	"oedema_grade" integer,
	"cells" text,
	"signed_by" uuid NOT NULL,
	"signed_at" timestamp with time zone NOT NULL,
	"amend_reason" text,
	CONSTRAINT "reviews_version" UNIQUE("visit_id","version"),
	CONSTRAINT "reviews_amendment" CHECK ("reviews"."version" = 1 or "reviews"."amend_reason" is not null),
	CONSTRAINT "reviews_oedema" CHECK ("reviews"."oedema_grade" is null or "reviews"."oedema_grade" between 0 and 4),
	CONSTRAINT "reviews_iop" CHECK ("reviews"."iop_mmhg" is null or "reviews"."iop_mmhg" between 0 and 80)
);
--> statement-breakpoint
CREATE TABLE "session_places" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"session_id" uuid NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"minutes" integer NOT NULL,
	"closed_at" timestamp with time zone
);
--> statement-breakpoint
CREATE TABLE "visits" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"pathway_id" uuid NOT NULL,
	"patient_id" uuid NOT NULL,
	"place_id" uuid,
	"site_id" uuid NOT NULL,
	"kind" text NOT NULL,
	"state" text DEFAULT 'booked' NOT NULL,
	"starts_at" timestamp with time zone NOT NULL,
	"booked_by" uuid,
	"booked_at" timestamp with time zone NOT NULL,
	"confirmed_at" timestamp with time zone,
	"cannot_come_at" timestamp with time zone,
	"arrived_at" timestamp with time zone,
	"sent_in_at" timestamp with time zone,
	"optometrist_id" uuid,
	"done_at" timestamp with time zone,
	"missing_at" timestamp with time zone,
	"cancel_reason" text,
	"note" text DEFAULT '' NOT NULL,
	"row_version" integer DEFAULT 1 NOT NULL,
	CONSTRAINT "visits_of_pathway" UNIQUE("id","pathway_id"),
	CONSTRAINT "visits_kind" CHECK ("visits"."kind" in ('day-one', 'first-week', 'final', 'unplanned')),
	CONSTRAINT "visits_state" CHECK ("visits"."state" in ('booked', 'arrived', 'with-optometrist', 'done', 'missing', 'cancelled', 'moved')),
	CONSTRAINT "visits_cancelled" CHECK (("visits"."state" = 'cancelled') = ("visits"."cancel_reason" is not null))
);
--> statement-breakpoint
CREATE TABLE "inbound_texts" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"provider_id" text NOT NULL,
	"from_number" text NOT NULL,
	"patient_id" uuid,
	"visit_id" uuid,
	"site_id" uuid,
	"body" text NOT NULL,
	"meaning" text NOT NULL,
	"received_at" timestamp with time zone NOT NULL,
	"handled_by" uuid,
	"handled_at" timestamp with time zone,
	"handled_words" text,
	CONSTRAINT "inbound_texts_provider_id_unique" UNIQUE("provider_id")
);
--> statement-breakpoint
CREATE TABLE "message_events" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"message_id" uuid NOT NULL,
	"at" timestamp with time zone NOT NULL,
	"kind" text NOT NULL,
	"detail" jsonb DEFAULT '{}'::jsonb NOT NULL
);
--> statement-breakpoint
CREATE TABLE "messages" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"kind" text NOT NULL,
	"recipient_key" text NOT NULL,
	"subject_key" text NOT NULL,
	"occasion" text NOT NULL,
	"channel" text NOT NULL,
	"patient_id" uuid,
	"pathway_id" uuid,
	"person_id" uuid,
	"visit_id" uuid,
	"escalation_id" uuid,
	"site_id" uuid,
	"to_address" text NOT NULL,
	"subject" text DEFAULT '' NOT NULL,
	"body" text NOT NULL,
	"language" text DEFAULT 'en' NOT NULL,
	"calendar" text,
	"state" text DEFAULT 'queued' NOT NULL,
	"due_at" timestamp with time zone NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"attempts" integer DEFAULT 0 NOT NULL,
	"lease_until" timestamp with time zone,
	"in_doubt_since" timestamp with time zone,
	"provider_id" text,
	"last_error" text,
	"sent_at" timestamp with time zone,
	"delivered_at" timestamp with time zone,
	"created_at" timestamp with time zone NOT NULL,
	CONSTRAINT "messages_provider_id_unique" UNIQUE("provider_id"),
	CONSTRAINT "messages_once" UNIQUE("recipient_key","kind","subject_key","occasion","channel"),
	CONSTRAINT "messages_kind" CHECK ("messages"."kind" in ('surgery.reminder', 'dayone.evening', 'dayone.morning', 'visit.reminder', 'visit.changed', 'visit.cancelled', 'safety.day3', 'safety.day7', 'drops.change', 'missing.patient', 'alert.surgeon', 'alert.rung', 'letter.sent', 'answer.confirmed', 'answer.cannot-come', 'answer.worried', 'answer.which', 'answer.stopped', 'answer.started', 'answer.received', 'account.reset', 'reply.hand')),
	CONSTRAINT "messages_state" CHECK ("messages"."state" in ('queued', 'sending', 'sent', 'delivered', 'failed', 'expired', 'withdrawn', 'held')),
	CONSTRAINT "messages_channel" CHECK ("messages"."channel" in ('text', 'email')),
	CONSTRAINT "messages_one_recipient" CHECK (num_nonnulls("messages"."patient_id", "messages"."person_id") = 1)
);
--> statement-breakpoint
CREATE TABLE "patient_links" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"token_hash" text NOT NULL,
	"patient_id" uuid NOT NULL,
	"visit_id" uuid,
	"pathway_id" uuid,
	"created_at" timestamp with time zone NOT NULL,
	"expires_at" timestamp with time zone NOT NULL,
	"failed_tries" integer DEFAULT 0 NOT NULL,
	"locked_until" timestamp with time zone,
	"closed_at" timestamp with time zone,
	CONSTRAINT "patient_links_token_hash_unique" UNIQUE("token_hash")
);
--> statement-breakpoint
CREATE TABLE "symptom_checks" (
	"id" uuid PRIMARY KEY DEFAULT gen_random_uuid() NOT NULL,
	"patient_id" uuid NOT NULL,
	"pathway_id" uuid NOT NULL,
	"answers" jsonb NOT NULL,
	"urgency" text,
	"on_nurse_list" text,
	"at" timestamp with time zone NOT NULL
);
--> statement-breakpoint
ALTER TABLE "biometries" ADD CONSTRAINT "biometries_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "biometries" ADD CONSTRAINT "biometries_measured_by_people_id_fk" FOREIGN KEY ("measured_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "biometries" ADD CONSTRAINT "biometries_accepted_by_people_id_fk" FOREIGN KEY ("accepted_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lens_plans" ADD CONSTRAINT "lens_plans_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lens_plans" ADD CONSTRAINT "lens_plans_biometry_id_biometries_id_fk" FOREIGN KEY ("biometry_id") REFERENCES "public"."biometries"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "lens_plans" ADD CONSTRAINT "lens_plans_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalation_actions" ADD CONSTRAINT "escalation_actions_escalation_id_escalations_id_fk" FOREIGN KEY ("escalation_id") REFERENCES "public"."escalations"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalation_actions" ADD CONSTRAINT "escalation_actions_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_raised_by_people_id_fk" FOREIGN KEY ("raised_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_surgeon_id_people_id_fk" FOREIGN KEY ("surgeon_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_acknowledged_by_people_id_fk" FOREIGN KEY ("acknowledged_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_closed_by_people_id_fk" FOREIGN KEY ("closed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "escalations" ADD CONSTRAINT "escalations_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "shifts" ADD CONSTRAINT "shifts_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "shifts" ADD CONSTRAINT "shifts_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "password_resets" ADD CONSTRAINT "password_resets_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "roles" ADD CONSTRAINT "roles_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "roles" ADD CONSTRAINT "roles_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "roles" ADD CONSTRAINT "roles_practice_id_practices_id_fk" FOREIGN KEY ("practice_id") REFERENCES "public"."practices"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "sessions" ADD CONSTRAINT "sessions_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "attachments" ADD CONSTRAINT "attachments_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "attachments" ADD CONSTRAINT "attachments_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "attachments" ADD CONSTRAINT "attachments_added_by_people_id_fk" FOREIGN KEY ("added_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathway_events" ADD CONSTRAINT "pathway_events_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathway_events" ADD CONSTRAINT "pathway_events_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathways" ADD CONSTRAINT "pathways_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathways" ADD CONSTRAINT "pathways_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathways" ADD CONSTRAINT "pathways_surgeon_id_people_id_fk" FOREIGN KEY ("surgeon_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "pathways" ADD CONSTRAINT "pathways_practice_id_practices_id_fk" FOREIGN KEY ("practice_id") REFERENCES "public"."practices"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patients" ADD CONSTRAINT "patients_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referrals" ADD CONSTRAINT "referrals_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "referrals" ADD CONSTRAINT "referrals_triaged_by_people_id_fk" FOREIGN KEY ("triaged_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "consents" ADD CONSTRAINT "consents_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "consents" ADD CONSTRAINT "consents_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "operation_notes" ADD CONSTRAINT "operation_notes_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "operation_notes" ADD CONSTRAINT "operation_notes_case_id_theatre_cases_id_fk" FOREIGN KEY ("case_id") REFERENCES "public"."theatre_cases"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "operation_notes" ADD CONSTRAINT "operation_notes_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "risk_assessments" ADD CONSTRAINT "risk_assessments_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "risk_assessments" ADD CONSTRAINT "risk_assessments_assessed_by_people_id_fk" FOREIGN KEY ("assessed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD CONSTRAINT "theatre_cases_list_id_theatre_lists_id_fk" FOREIGN KEY ("list_id") REFERENCES "public"."theatre_lists"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_cases" ADD CONSTRAINT "theatre_cases_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD CONSTRAINT "theatre_lists_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "theatre_lists" ADD CONSTRAINT "theatre_lists_surgeon_id_people_id_fk" FOREIGN KEY ("surgeon_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "clinic_sessions" ADD CONSTRAINT "clinic_sessions_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "missing_steps" ADD CONSTRAINT "missing_steps_visit_id_visits_id_fk" FOREIGN KEY ("visit_id") REFERENCES "public"."visits"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "missing_steps" ADD CONSTRAINT "missing_steps_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "review_drafts" ADD CONSTRAINT "review_drafts_visit_id_visits_id_fk" FOREIGN KEY ("visit_id") REFERENCES "public"."visits"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "review_drafts" ADD CONSTRAINT "review_drafts_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reviews" ADD CONSTRAINT "reviews_signed_by_people_id_fk" FOREIGN KEY ("signed_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "reviews" ADD CONSTRAINT "reviews_same_pathway" FOREIGN KEY ("visit_id","pathway_id") REFERENCES "public"."visits"("id","pathway_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "session_places" ADD CONSTRAINT "session_places_session_id_clinic_sessions_id_fk" FOREIGN KEY ("session_id") REFERENCES "public"."clinic_sessions"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_place_id_session_places_id_fk" FOREIGN KEY ("place_id") REFERENCES "public"."session_places"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_booked_by_people_id_fk" FOREIGN KEY ("booked_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_optometrist_id_people_id_fk" FOREIGN KEY ("optometrist_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "visits" ADD CONSTRAINT "visits_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD CONSTRAINT "inbound_texts_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD CONSTRAINT "inbound_texts_visit_id_visits_id_fk" FOREIGN KEY ("visit_id") REFERENCES "public"."visits"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD CONSTRAINT "inbound_texts_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD CONSTRAINT "inbound_texts_handled_by_people_id_fk" FOREIGN KEY ("handled_by") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "message_events" ADD CONSTRAINT "message_events_message_id_messages_id_fk" FOREIGN KEY ("message_id") REFERENCES "public"."messages"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_visit_id_visits_id_fk" FOREIGN KEY ("visit_id") REFERENCES "public"."visits"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_escalation_id_escalations_id_fk" FOREIGN KEY ("escalation_id") REFERENCES "public"."escalations"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_site_id_sites_id_fk" FOREIGN KEY ("site_id") REFERENCES "public"."sites"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_links" ADD CONSTRAINT "patient_links_patient_id_patients_id_fk" FOREIGN KEY ("patient_id") REFERENCES "public"."patients"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_links" ADD CONSTRAINT "patient_links_visit_id_visits_id_fk" FOREIGN KEY ("visit_id") REFERENCES "public"."visits"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "patient_links" ADD CONSTRAINT "patient_links_pathway_id_pathways_id_fk" FOREIGN KEY ("pathway_id") REFERENCES "public"."pathways"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
ALTER TABLE "symptom_checks" ADD CONSTRAINT "symptom_checks_same_patient" FOREIGN KEY ("pathway_id","patient_id") REFERENCES "public"."pathways"("id","patient_id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "audit_rows_at" ON "audit_rows" USING btree ("at","id");--> statement-breakpoint
CREATE INDEX "audit_rows_subject" ON "audit_rows" USING btree ("subject_kind","subject_id");--> statement-breakpoint
CREATE INDEX "escalation_actions_of" ON "escalation_actions" USING btree ("escalation_id","at");--> statement-breakpoint
CREATE UNIQUE INDEX "escalations_one_open" ON "escalations" USING btree ("pathway_id") WHERE state <> 'closed';--> statement-breakpoint
CREATE INDEX "escalations_open_list" ON "escalations" USING btree ("site_id","state","answer_by");--> statement-breakpoint
CREATE INDEX "escalations_rungs_due" ON "escalations" USING btree ("next_rung_at") WHERE state = 'open';--> statement-breakpoint
CREATE UNIQUE INDEX "people_email_once" ON "people" USING btree (lower("email"));--> statement-breakpoint
CREATE UNIQUE INDEX "roles_once" ON "roles" USING btree ("person_id","role",coalesce("site_id", "practice_id"));--> statement-breakpoint
CREATE INDEX "sessions_person" ON "sessions" USING btree ("person_id");--> statement-breakpoint
CREATE INDEX "pathway_events_of" ON "pathway_events" USING btree ("pathway_id","at");--> statement-breakpoint
CREATE UNIQUE INDEX "pathways_one_open_per_eye" ON "pathways" USING btree ("patient_id","eye") WHERE state <> 'closed' and stage <> 'discharge';--> statement-breakpoint
CREATE INDEX "pathways_list" ON "pathways" USING btree ("site_id","stage","surgery_at","id");--> statement-breakpoint
CREATE INDEX "pathways_practice" ON "pathways" USING btree ("practice_id");--> statement-breakpoint
CREATE INDEX "pathways_surgeon" ON "pathways" USING btree ("surgeon_id");--> statement-breakpoint
CREATE INDEX "patients_name_search" ON "patients" USING btree (lower("name") text_pattern_ops);--> statement-breakpoint
CREATE INDEX "patients_same" ON "patients" USING btree ("birth_date");--> statement-breakpoint
CREATE INDEX "patients_phone" ON "patients" USING btree ("phone");--> statement-breakpoint
CREATE UNIQUE INDEX "theatre_cases_live" ON "theatre_cases" USING btree ("pathway_id") WHERE state in ('planned', 'in-theatre');--> statement-breakpoint
CREATE INDEX "theatre_cases_list" ON "theatre_cases" USING btree ("list_id","position");--> statement-breakpoint
CREATE INDEX "theatre_lists_day" ON "theatre_lists" USING btree ("site_id","starts_at");--> statement-breakpoint
CREATE INDEX "clinic_sessions_day" ON "clinic_sessions" USING btree ("site_id","starts_at");--> statement-breakpoint
CREATE INDEX "missing_steps_of" ON "missing_steps" USING btree ("visit_id","at");--> statement-breakpoint
CREATE INDEX "reviews_pathway" ON "reviews" USING btree ("pathway_id","signed_at");--> statement-breakpoint
CREATE INDEX "session_places_of" ON "session_places" USING btree ("session_id","starts_at");--> statement-breakpoint
CREATE UNIQUE INDEX "visits_one_per_place" ON "visits" USING btree ("place_id") WHERE state not in ('cancelled', 'moved');--> statement-breakpoint
CREATE UNIQUE INDEX "visits_one_waiting_per_kind" ON "visits" USING btree ("pathway_id","kind") WHERE state in ('booked', 'arrived', 'with-optometrist', 'missing') and kind <> 'unplanned';--> statement-breakpoint
CREATE INDEX "visits_day" ON "visits" USING btree ("site_id","starts_at");--> statement-breakpoint
CREATE INDEX "visits_pathway" ON "visits" USING btree ("pathway_id","starts_at");--> statement-breakpoint
CREATE INDEX "inbound_texts_open" ON "inbound_texts" USING btree ("site_id","handled_at","received_at");--> statement-breakpoint
CREATE INDEX "message_events_of" ON "message_events" USING btree ("message_id","at");--> statement-breakpoint
CREATE INDEX "messages_due" ON "messages" USING btree ("due_at") WHERE state in ('queued', 'sending');--> statement-breakpoint
CREATE INDEX "messages_patient" ON "messages" USING btree ("patient_id","created_at");--> statement-breakpoint
CREATE INDEX "messages_visit" ON "messages" USING btree ("visit_id");