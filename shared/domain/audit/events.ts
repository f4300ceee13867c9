/** Every event that the audit log may hold. A new act needs a line here first. */
export const auditEvents = [
  'people.signed-in', 'people.sign-in-refused', 'people.signed-out', 'people.signed-out-everywhere', 'people.password-reset-asked',
  'people.password-reset', 'people.added', 'people.changed', 'people.disabled', 'people.roles-changed',
  'patient.added', 'patient.changed', 'patient.viewed', 'patient.searched', 'patient.merged', 'patient.unmerged',
  'pathway.opened', 'pathway.advanced', 'pathway.held', 'pathway.released', 'pathway.closed', 'pathway.reopened', 'pathway.shared', 'pathway.decided',
  'referral.triaged', 'referral.changed', 'referral.imported', 'referral.import-checked', 'referral.attachment-added', 'referral.attachment-opened',
  'biometry.recorded', 'biometry.dicom-read', 'biometry.explained', 'biometry.accepted', 'biometry.lens-plan-signed', 'biometry.lens-plan-amended',
  'theatre.list-ordered', 'theatre.list-locked', 'theatre.list-unlocked', 'theatre.list-printed', 'theatre.case-replaced', 'theatre.case-constraints', 'theatre.safety-step', 'theatre.lens-scanned', 'theatre.safety-stopped', 'theatre.stop-explained',
  'theatre.risk-assessed', 'theatre.consent-signed', 'theatre.list-added', 'theatre.case-added', 'theatre.case-cancelled', 'theatre.note-signed', 'theatre.note-amended',
  'visit.booked', 'visit.moved', 'visit.cancelled', 'visit.arrived', 'visit.sent-in', 'visit.missing', 'visit.step-logged', 'visit.session-added', 'visit.session-changed', 'visit.session-closed', 'visit.places-added', 'visit.place-closed',
  'review.draft-saved', 'review.signed', 'review.amended',
  'escalation.raised', 'escalation.joined', 'escalation.acknowledged', 'escalation.taken-over', 'escalation.recorded', 'escalation.closed', 'escalation.rung', 'escalation.shift-set', 'escalation.thresholds-set',
  'messaging.sent-by-hand', 'messaging.reply-handled', 'messaging.texts-stopped', 'messaging.texts-started', 'messaging.link-opened', 'messaging.link-refused', 'messaging.answered-by-patient', 'messaging.symptoms-answered', 'messaging.check-unanswered',
  'outcome.letter-sent', 'outcome.letter-signed',
  'demo.clock-moved',
] as const
export type AuditEvent = typeof auditEvents[number]
