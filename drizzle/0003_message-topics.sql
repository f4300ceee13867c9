ALTER TABLE "messages" DROP CONSTRAINT "messages_kind";--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD COLUMN "person_id" uuid;--> statement-breakpoint
ALTER TABLE "messages" ADD COLUMN "topic" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "symptom_checks" ADD COLUMN "words" text DEFAULT '' NOT NULL;--> statement-breakpoint
ALTER TABLE "inbound_texts" ADD CONSTRAINT "inbound_texts_person_id_people_id_fk" FOREIGN KEY ("person_id") REFERENCES "public"."people"("id") ON DELETE no action ON UPDATE no action;--> statement-breakpoint
CREATE INDEX "messages_same_words" ON "messages" USING btree ("recipient_key","topic") WHERE topic <> '';--> statement-breakpoint
CREATE INDEX "messages_checks_sent" ON "messages" USING btree ("kind","due_at") WHERE kind = 'safety.day3';--> statement-breakpoint
CREATE INDEX "messages_alerts" ON "messages" USING btree ("person_id","due_at") WHERE person_id is not null;--> statement-breakpoint
ALTER TABLE "messages" ADD CONSTRAINT "messages_kind" CHECK ("messages"."kind" in ('surgery.reminder', 'dayone.evening', 'dayone.morning', 'visit.reminder', 'visit.changed', 'visit.cancelled', 'safety.day3', 'safety.day7', 'drops.change', 'missing.patient', 'alert.surgeon', 'alert.rung', 'letter.sent', 'answer.confirmed', 'answer.cannot-come', 'answer.worried', 'answer.which', 'answer.stopped', 'answer.started', 'answer.received', 'account.reset', 'reply.hand', 'alert.answer'));