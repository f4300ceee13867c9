import type { RoleName } from '#shared/domain/people/vocabulary'

/** Ids of one site that routes are tried with. */
export interface Ids { site: string, surgeon: string, practice: string, patient: string, pathway: string, fresh: string, biometry: string, visit: string, review: string, place: string, session: string, escalation: string, message: string, reply: string, list: string, case: string, other: string, import: string, attachment: string, merge: string }

export type Who = RoleName | 'community'
type Words = '' | 'all' | 'team' | string

export interface RouteRow {
  /** Below server/: `api/visit/index.post`. */
  file: string
  /** Whom it answers. `all`: everybody who is signed in; else the roles by name. `team`: the five roles of a site. `community`: for a pathway shared with their practice. */
  allow: Words
  path?: (ids: Ids) => string
  body?: (ids: Ids) => unknown
  /** Nobody has to be signed in; says why. */
  public?: string
  /** Ids of the path (or body) belong to a site: a colleague of another site is told that there is none. `refused` where the body names the site itself. */
  foreign?: 'hidden' | 'refused' | 'own-view'
}

const team = 'coordinator nurse optometrist surgeon clinical-lead'
const surgeons = 'surgeon clinical-lead'
const soon = (hours: number) => new Date(Date.now() + hours * 3_600_000).toISOString()
const findings = { painScore: 1, iopMmHg: 15 }
const measures = { axialLengthMm: 23.5, k1D: 43, k1AxisDegrees: 10, k2D: 44, k2AxisDegrees: 100 }
const plan = (ids: Ids) => ({ biometryId: ids.biometry, model: 'Monofocal', powerD: 21, targetD: 0, predictedD: 0, aConstant: 118.7 })
const note = { operatedAt: new Date(Date.now() - 3_600_000).toISOString(), anaesthesia: 'Drops', incision: '2.4 mm', technique: 'Divide', complications: [], lensModel: 'Monofocal', lensPowerD: 21, drops: [], dayOne: {} }
const noFlags = { suddenLoss: false, painOrRedness: false, flashesOrFloaters: false }
const rowVersion = 1

/** Every route of the product. A route that is not here fails the matrix; see the test for what each word promises. */
export const routes: readonly RouteRow[] = [
  { file: 'api/biometry/[id]/accept.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/biometry/${ids.pathway}/accept`, body: ids => ({ biometryId: ids.biometry }) },
  { file: 'api/biometry/[id]/dicom.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/biometry/${ids.pathway}/dicom` },
  { file: 'api/biometry/[id]/explain.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/biometry/${ids.pathway}/explain`, body: ids => ({ biometryId: ids.biometry, ruleId: 'a.rule', words: 'Looked at again.' }) },
  { file: 'api/biometry/[id]/index.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/biometry/${ids.pathway}`, body: () => ({ eye: measures, baseVersion: 900 }) },
  { file: 'api/biometry/[id]/lens-plan.post', allow: surgeons, path: ids => `/api/biometry/${ids.pathway}/lens-plan`, body: ids => ({ ...plan(ids), baseVersion: 900 }) },
  { file: 'api/biometry/[id]/second-check.post', allow: `${team} community`, path: ids => `/api/biometry/${ids.pathway}/second-check`, body: plan },
  { file: 'api/demo/clock.post', allow: 'all', public: 'Invented people only; not found outside the demo.', body: () => ({ minutes: 1 }) },
  { file: 'api/demo/fault.post', allow: 'all', public: 'Invented people only; not found outside the demo.', body: () => ({ mode: 'normal' }) },
  { file: 'api/demo/reply.post', allow: 'all', public: 'Invented people only; not found outside the demo.', body: () => ({ from: '+447700900999', body: 'Hello' }) },
  { file: 'api/demo/state.get', allow: 'all', public: 'Invented people only; not found outside the demo.' },
  { file: 'api/escalation/[id]/acknowledge.post', allow: surgeons, path: ids => `/api/escalation/${ids.escalation}/acknowledge`, body: () => ({ plan: 'I am ringing now', rowVersion }) },
  { file: 'api/escalation/[id]/close.post', allow: surgeons, path: ids => `/api/escalation/${ids.escalation}/close`, body: () => ({ words: 'Seen and treated.', rowVersion: 900 }) },
  { file: 'api/escalation/[id]/record.post', allow: surgeons, path: ids => `/api/escalation/${ids.escalation}/record`, body: () => ({ words: 'Rang the patient.', rowVersion: 900 }) },
  { file: 'api/escalation/[id]/take-over.post', allow: surgeons, path: ids => `/api/escalation/${ids.escalation}/take-over`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/escalation/index.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/escalation/index.post', allow: 'nurse optometrist surgeon clinical-lead community', body: ids => ({ pathwayId: ids.pathway, urgency: 'this-week', words: 'Please look.' }) },
  { file: 'api/messaging/conversation/[id].get', allow: team, path: ids => `/api/messaging/conversation/${ids.patient}` },
  { file: 'api/messaging/conversation/[id].post', allow: 'nurse coordinator surgeon clinical-lead', path: ids => `/api/messaging/conversation/${ids.patient}`, body: () => ({ words: 'Please ring us.', key: crypto.randomUUID() }) },
  { file: 'api/messaging/going-out.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/messaging/link/[token]/calendar.get', allow: 'all', public: 'A patient has no account; the link and the birth date prove who they are.', path: () => '/api/messaging/link/aaaaaaaaaaaaaaaaaaaaaaaa/calendar' },
  { file: 'api/messaging/link/[token]/answer.post', allow: 'all', public: 'A patient has no account; the link and the birth date prove who they are.', path: () => '/api/messaging/link/aaaaaaaaaaaaaaaaaaaaaaaa/answer', body: ids => ({ visitId: ids.visit, answer: 'coming' }) },
  { file: 'api/messaging/link/[token]/index.get', allow: 'all', public: 'A patient has no account; the link and the birth date prove who they are.', path: () => '/api/messaging/link/aaaaaaaaaaaaaaaaaaaaaaaa' },
  { file: 'api/messaging/link/[token]/open.post', allow: 'all', public: 'A patient has no account; the link and the birth date prove who they are.', path: () => '/api/messaging/link/aaaaaaaaaaaaaaaaaaaaaaaa/open', body: () => ({ birthDate: '1950-01-01' }) },
  { file: 'api/messaging/link/[token]/symptoms.post', allow: 'all', public: 'A patient has no account; the link and the birth date prove who they are.', path: () => '/api/messaging/link/aaaaaaaaaaaaaaaaaaaaaaaa/symptoms', body: () => ({ symptoms: [], nothingOfThese: true }) },
  { file: 'api/messaging/messages/[id]/again.post', allow: 'nurse coordinator surgeon clinical-lead', path: ids => `/api/messaging/messages/${ids.message}/again`, body: () => ({}) },
  { file: 'api/messaging/messages/[id]/settle.post', allow: 'nurse coordinator surgeon clinical-lead', path: ids => `/api/messaging/messages/${ids.message}/settle`, body: () => ({ words: 'Rang the patient.' }) },
  { file: 'api/messaging/replies/[id]/handle.post', allow: 'nurse coordinator surgeon clinical-lead', path: ids => `/api/messaging/replies/${ids.reply}/handle`, body: () => ({ words: 'Rang the patient.' }) },
  { file: 'api/messaging/templates.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/messaging/replies/index.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/pathway/[id]/advance.post', allow: team, path: ids => `/api/pathway/${ids.pathway}/advance`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/pathway/[id]/close.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/close`, body: () => ({ reason: 'moved-away', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/fellow-eye.post', allow: 'optometrist surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/fellow-eye`, body: () => ({ decision: 'Later', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/first-check-found.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/first-check-found`, body: () => ({ found: 'All well', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/first-check.post', allow: surgeons, path: ids => `/api/pathway/${ids.pathway}/first-check`, body: () => ({ decision: 'By telephone', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/hold.post', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/hold`, body: () => ({ reason: 'Waits', lookAgainOn: '2030-01-01', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/index.get', allow: `${team} community`, path: ids => `/api/pathway/${ids.pathway}` },
  { file: 'api/pathway/[id]/letter.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/letter`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/pathway/[id]/release.post', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/release`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/pathway/[id]/reopen.post', allow: surgeons, path: ids => `/api/pathway/${ids.pathway}/reopen`, body: () => ({ reason: 'Came back', rowVersion: 900 }) },
  { file: 'api/pathway/[id]/share.post', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/pathway/${ids.pathway}/share`, body: ids => ({ practiceId: ids.practice, rowVersion: 900 }) },
  { file: 'api/pathway/choices.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/pathway/filter/[id].delete', allow: '', path: ids => `/api/pathway/filter/${ids.site}` },
  { file: 'api/pathway/filter/index.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/pathway/filter/index.post', allow: 'all', body: () => ({ name: 'Late before surgery', query: { show: 'late' } }), foreign: 'own-view' },
  { file: 'api/pathway/index.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/patient/[id].get', allow: `${team} community`, path: ids => `/api/patient/${ids.patient}` },
  { file: 'api/patient/[id]/contacts.put', allow: team, path: ids => `/api/patient/${ids.patient}/contacts`, body: () => ({ phone: '07700 900812', rowVersion: 900 }) },
  { file: 'api/patient/[id]/merge.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/patient/${ids.patient}/merge`, body: ids => ({ mergedId: ids.other, reason: 'Same person', keptRowVersion: 900, mergedRowVersion: 900 }) },
  { file: 'api/patient/[id]/merges.get', allow: `${team} community`, path: ids => `/api/patient/${ids.patient}/merges` },
  { file: 'api/patient/merge/[id]/undo.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/patient/merge/${ids.merge}/undo`, body: () => ({ reason: 'Two people' }) },
  { file: 'api/patient/index.get', allow: 'all', path: () => '/api/patient?find=am', foreign: 'own-view' },
  { file: 'api/patient/index.post', allow: 'coordinator nurse surgeon clinical-lead', body: ids => ({ siteId: ids.site, patientId: ids.patient, eyes: ['right'], referral: { referrer: 'A practice', reason: 'Blurred sight' } }), foreign: 'refused' },
  { file: 'api/people/me.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/people/sign-in.post', allow: 'all', public: 'Nobody is signed in yet.', body: () => ({ email: 'nobody@example.org', password: 'not a password of anybody' }) },
  { file: 'api/people/sign-out.post', allow: 'all', body: () => ({}), foreign: 'own-view' },
  { file: 'api/referral/[id]/attachments/index.get', allow: `${team} community`, path: ids => `/api/referral/${ids.pathway}/attachments` },
  { file: 'api/referral/[id]/attachments/index.post', allow: team, path: ids => `/api/referral/${ids.pathway}/attachments` },
  { file: 'api/referral/[id]/index.get', allow: `${team} community`, path: ids => `/api/referral/${ids.fresh}` },
  { file: 'api/referral/[id]/index.put', allow: team, path: ids => `/api/referral/${ids.pathway}`, body: () => ({ referrer: 'A practice', reason: 'Blurred sight', redFlags: noFlags, rowVersion: 900 }) },
  { file: 'api/referral/[id]/triage.post', allow: surgeons, path: ids => `/api/referral/${ids.fresh}/triage`, body: () => ({ decision: 'accepted', redFlags: noFlags, rowVersion: 900 }) },
  { file: 'api/referral/fhir.post', allow: 'coordinator clinical-lead', path: ids => `/api/referral/fhir?siteId=${ids.site}`, body: () => ({ resourceType: 'Bundle' }), foreign: 'refused' },
  { file: 'api/referral/import/[id]/commit.post', allow: 'coordinator clinical-lead', path: ids => `/api/referral/import/${ids.import}/commit` },
  { file: 'api/referral/import/[id]/errors.get', allow: 'coordinator clinical-lead', path: ids => `/api/referral/import/${ids.import}/errors` },
  { file: 'api/referral/import/[id]/index.get', allow: 'coordinator clinical-lead', path: ids => `/api/referral/import/${ids.import}` },
  { file: 'api/referral/import/index.get', allow: 'coordinator clinical-lead', foreign: 'own-view' },
  { file: 'api/referral/import/index.post', allow: 'coordinator clinical-lead', path: ids => `/api/referral/import?siteId=${ids.site}`, foreign: 'refused' },
  { file: 'api/referral/index.get', allow: 'coordinator surgeon clinical-lead', foreign: 'own-view' },
  { file: 'api/review/[visitId]/amend.post', allow: 'optometrist surgeon clinical-lead community', path: ids => `/api/review/${ids.review}/amend`, body: () => ({ findings, reason: 'Typed wrongly', baseVersion: 900 }) },
  { file: 'api/review/[visitId]/draft.put', allow: 'optometrist surgeon clinical-lead community', path: ids => `/api/review/${ids.visit}/draft`, body: () => ({ findings, rowVersion: 900 }) },
  { file: 'api/review/[visitId]/index.get', allow: `${team} community`, path: ids => `/api/review/${ids.visit}` },
  { file: 'api/review/[visitId]/sign.post', allow: 'optometrist surgeon clinical-lead community', path: ids => `/api/review/${ids.visit}/sign`, body: () => ({ findings: {} }) },
  { file: 'api/theatre/case/[id]/cancel.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}/cancel`, body: () => ({ reason: 'Unwell today' }) },
  { file: 'api/theatre/case/[id]/explain.post', allow: surgeons, path: ids => `/api/theatre/case/${ids.case}/explain`, body: () => ({ stopId: '00000000-0000-4000-8000-000000000000', words: 'Checked by two.' }) },
  { file: 'api/theatre/case/[id]/index.put', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}`, body: () => ({ rowVersion: 900, plannedMinutes: 30, constraints: {}, reason: 'Said by the ward' }) },
  { file: 'api/theatre/case/[id]/lens.post', allow: 'nurse surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}/lens`, body: () => ({ typed: { model: 'Monofocal', powerD: 21, expiresOn: '2030-01-01' } }) },
  { file: 'api/theatre/case/[id]/replace.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}/replace`, body: ids => ({ pathwayId: ids.pathway, reason: 'Unwell today' }) },
  { file: 'api/theatre/case/[id]/safety/[step].post', allow: 'nurse surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}/safety/before-anaesthesia`, body: () => ({ answers: {} }) },
  { file: 'api/theatre/case/[id]/safety/index.get', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/theatre/case/${ids.case}/safety` },
  { file: 'api/theatre/index.get', allow: team, foreign: 'own-view' },
  { file: 'api/theatre/index.post', allow: 'coordinator surgeon clinical-lead', body: ids => ({ siteId: ids.site, surgeonId: ids.surgeon, room: 'Matrix room', startsAt: soon(-90), endsAt: soon(-80) }), foreign: 'refused' },
  { file: 'api/theatre/list/[id]/case.post', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/list/${ids.list}/case`, body: ids => ({ pathwayId: ids.pathway }) },
  { file: 'api/theatre/list/[id]/index.get', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/theatre/list/${ids.list}` },
  { file: 'api/theatre/list/[id]/index.put', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/list/${ids.list}`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/theatre/list/[id]/lock.post', allow: 'clinical-lead', path: ids => `/api/theatre/list/${ids.list}/lock`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/theatre/list/[id]/order.put', allow: 'coordinator surgeon clinical-lead', path: ids => `/api/theatre/list/${ids.list}/order`, body: ids => ({ rowVersion: 900, order: [ids.case] }) },
  { file: 'api/theatre/list/[id]/pdf.get', allow: 'coordinator nurse surgeon clinical-lead', path: ids => `/api/theatre/list/${ids.list}/pdf` },
  { file: 'api/theatre/list/[id]/unlock.post', allow: 'clinical-lead', path: ids => `/api/theatre/list/${ids.list}/unlock`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/theatre/pathway/[id]/amend-note.post', allow: surgeons, path: ids => `/api/theatre/pathway/${ids.pathway}/amend-note`, body: () => ({ ...note, baseVersion: 900, reason: 'Typed wrongly' }) },
  { file: 'api/theatre/pathway/[id]/consent.post', allow: surgeons, path: ids => `/api/theatre/pathway/${ids.pathway}/consent`, body: () => ({ discussed: 'Benefits and risks.', baseVersion: 900 }) },
  { file: 'api/theatre/pathway/[id]/note-defaults.get', allow: `${team} community`, path: ids => `/api/theatre/pathway/${ids.pathway}/note-defaults` },
  { file: 'api/theatre/pathway/[id]/note.post', allow: surgeons, path: ids => `/api/theatre/pathway/${ids.fresh}/note`, body: () => note },
  { file: 'api/theatre/pathway/[id]/risk.post', allow: surgeons, path: ids => `/api/theatre/pathway/${ids.pathway}/risk`, body: () => ({ factors: {}, baseVersion: 900 }) },
  { file: 'api/visit/[id]/arrived.post', allow: 'nurse coordinator optometrist surgeon clinical-lead', path: ids => `/api/visit/${ids.visit}/arrived`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/visit/[id]/cancel.post', allow: 'nurse coordinator optometrist surgeon clinical-lead', path: ids => `/api/visit/${ids.visit}/cancel`, body: () => ({ reason: 'Unwell', rowVersion: 900 }) },
  { file: 'api/visit/[id]/missing-step.post', allow: 'nurse coordinator', path: ids => `/api/visit/${ids.visit}/missing-step`, body: () => ({ step: 'call', outcome: 'No answer' }) },
  { file: 'api/visit/[id]/missing.post', allow: 'nurse coordinator optometrist surgeon clinical-lead', path: ids => `/api/visit/${ids.visit}/missing`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/visit/[id]/move.post', allow: 'nurse coordinator optometrist surgeon clinical-lead', path: ids => `/api/visit/${ids.visit}/move`, body: ids => ({ placeId: ids.place, rowVersion: 900 }) },
  { file: 'api/visit/[id]/send-in.post', allow: 'nurse optometrist surgeon clinical-lead', path: ids => `/api/visit/${ids.visit}/send-in`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/visit/book-list.post', allow: 'all', body: ids => ({ bookings: [{ pathwayId: ids.fresh, placeId: ids.place }] }), foreign: 'own-view' },
  { file: 'api/visit/clinic.get', allow: team, foreign: 'own-view' },
  { file: 'api/visit/index.post', allow: 'nurse coordinator optometrist surgeon clinical-lead', body: ids => ({ pathwayId: ids.fresh, placeId: ids.place, kind: 'final' }) },
  { file: 'api/visit/open-places.get', allow: 'all', path: () => '/api/visit/open-places?kind=day-one', foreign: 'own-view' },
  { file: 'api/visit/place/[id]/close.post', allow: 'coordinator clinical-lead', path: ids => `/api/visit/place/${ids.place}/close`, body: () => ({}) },
  { file: 'api/visit/proposal.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/visit/session/[id]/close.post', allow: 'coordinator clinical-lead', path: ids => `/api/visit/session/${ids.session}/close`, body: () => ({ rowVersion: 900 }) },
  { file: 'api/visit/session/[id]/index.put', allow: 'coordinator clinical-lead', path: ids => `/api/visit/session/${ids.session}`, body: () => ({ room: 'Matrix room', rowVersion: 900 }) },
  { file: 'api/visit/session/[id]/places.post', allow: 'coordinator clinical-lead', path: ids => `/api/visit/session/${ids.session}/places`, body: () => ({ places: 1, minutes: 10, rowVersion: 900 }) },
  { file: 'api/visit/session/index.post', allow: 'coordinator clinical-lead', body: ids => ({ siteId: ids.site, kind: 'follow-up', room: 'Matrix room', startsAt: soon(-90), places: 1, minutes: 10 }), foreign: 'refused' },
  { file: 'api/visit/shared.get', allow: 'all', foreign: 'own-view' },
  { file: 'api/visit/to-book.get', allow: 'all', foreign: 'own-view' },
  { file: 'routes/files/[id].get', allow: `${team} community`, path: ids => `/files/${ids.attachment}` },
  { file: 'routes/health/ready.get', allow: 'all', public: 'Whoever starts the product asks whether it is ready.' },
  { file: 'routes/live.get', allow: 'all', foreign: 'own-view' },
  { file: 'routes/webhooks/text/inbound.post', allow: 'all', public: 'The text provider proves itself by its signature.' },
  { file: 'routes/webhooks/text/status.post', allow: 'all', public: 'The text provider proves itself by its signature.' },
]

export const methodOf = (row: RouteRow) => row.file.split('.').at(-1)!.toUpperCase()
export const pathOf = (row: RouteRow, ids: Ids) => row.path?.(ids) ?? `/${row.file.replace(/^routes\//, '').replace(/\.[a-z]+$/, '').replace(/\/index$/, '')}`
