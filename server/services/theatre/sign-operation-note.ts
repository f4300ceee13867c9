import { and, desc, eq, inArray } from 'drizzle-orm'
import { Temporal } from 'temporal-polyfill'
import type { Transaction } from '#server/db/client'
import { refusedConstraint } from '#server/db/refused-constraint'
import { lensPlans, operationNotes, theatreCases, visits } from '#server/db/schema/index'
import { notifyLive } from '#server/services/audit/notify-live'
import type { ServiceContext } from '#server/services/context'
import { queuePatientMessages, withdrawMessages } from '#server/services/messaging/queue-messages'
import { lockPathway, requireOpen } from '#server/services/pathway/load-pathway'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import { recordEvent } from '#server/services/pathway/record-event'
import { finishCase, requireNoOpenStop } from '#server/services/theatre/finish-case'
import { needDayOne } from '#server/services/theatre/need-day-one'
import type { AmendNoteBody, SignNoteBody } from '#shared/contracts/theatre'
import { DomainError } from '#shared/domain/errors'
import { allergiesTouched } from '#shared/domain/theatre/regimens'
import { languages } from '#shared/domain/messaging/vocabulary'
import { visitWords } from '#shared/domain/messaging/visit-words'
import { liveVisitStates } from '#shared/domain/visit/vocabulary'

interface Amendment { baseVersion: number, reason: string }

/** Signs the record of the case: the case is done, the eye is operated, and the need of its day-one check is known. High energy raises nothing. */
export function signOperationNote(ctx: ServiceContext, input: SignNoteBody & { pathwayId: string }) {
  return commitVersion(ctx, input.pathwayId, input, undefined)
}

/** A signed note is never changed: an amendment is the next version, with its reason, on the version that its author saw. */
export function amendOperationNote(ctx: ServiceContext, { baseVersion, reason, ...input }: AmendNoteBody & { pathwayId: string }) {
  return commitVersion(ctx, input.pathwayId, input, { baseVersion, reason })
}

async function commitVersion(ctx: ServiceContext, pathwayId: string, input: SignNoteBody, amendment: Amendment | undefined) {
  try {
    const done = await ctx.db.transaction(async (tx) => {
      const loaded = await lockPathway(tx, ctx, { pathwayId, act: 'signNote', refusal: 'A surgeon of this site signs operation notes.' })
      requireOpen(loaded.pathway)
      return write(tx, ctx, loaded, input, amendment)
    })
    await Promise.all([notifyLive(ctx.db, 'pathway', done.siteId, [pathwayId]), notifyLive(ctx.db, 'visit', done.siteId, [pathwayId])])
    return done.note
  }
  catch (error) {
    if (refusedConstraint(error) === 'operation_notes_version') throw new DomainError('theatre.already-signed', 'This note was signed meanwhile. Look at it, then amend it if needed.')
    throw error
  }
}

async function write(tx: Transaction, ctx: ServiceContext, loaded: LoadedPathway, input: SignNoteBody, amendment: Amendment | undefined) {
  const { pathway } = loaded
  const operatedAt = new Date(input.operatedAt)
  if (operatedAt > ctx.now) throw refuse('operatedAt', 'The operation cannot end in the future.')
  const [[last], [plan], [live]] = await Promise.all([
    tx.select().from(operationNotes).where(eq(operationNotes.pathwayId, pathway.id)).orderBy(desc(operationNotes.version)).limit(1),
    tx.select().from(lensPlans).where(eq(lensPlans.pathwayId, pathway.id)).orderBy(desc(lensPlans.version)).limit(1),
    tx.select().from(theatreCases).where(and(eq(theatreCases.pathwayId, pathway.id), inArray(theatreCases.state, ['planned', 'in-theatre']))).limit(1),
  ])
  requireTurn(loaded, last, live, amendment)
  if (live) await requireNoOpenStop(tx, live.id)
  const lensAsPlanned = plan !== undefined && plan.powerD === input.lensPowerD && sameModel(plan.model, input.lensModel)
  if (!lensAsPlanned && input.lensDeviationExplained.length < 3) {
    throw new DomainError('theatre.explanation-needed', 'The lens implanted is not the lens planned: say why.', { fields: [{ field: 'lensDeviationExplained', code: 'required', message: 'Say why another lens was implanted.' }], detail: { planned: plan ? { model: plan.model, powerD: plan.powerD } : null } })
  }
  requireAllergyAnswer(loaded, input)
  // Worked out before this note joins the surgeon's own notes, which it is measured against.
  const need = await needDayOne(tx, loaded, input, ctx.actor.personId)
  const { dayOne, operatedAt: _typed, lensDeviationExplained, allergyAnswer, ...stored } = withoutPathway(input)
  const version = (last?.version ?? 0) + 1
  const [note] = await tx.insert(operationNotes).values({ ...stored, pathwayId: pathway.id, caseId: last?.caseId ?? live?.id ?? null, version, operatedAt, lensAsPlanned, lensDeviationExplained: lensDeviationExplained || null, signedBy: ctx.actor.personId, signedAt: ctx.now, amendReason: amendment?.reason ?? null }).returning()
  if (!note) throw new DomainError('theatre.conflict', 'The note could not be signed.')
  if (live) await finishCase(tx, live, operatedAt)
  const changed = await recordEvent(tx, ctx, loaded, {
    kind: amendment ? 'note-amended' : 'note-signed', words: amendment ? `Operation note amended: ${amendment.reason}` : 'Operation note signed', audit: amendment ? 'theatre.note-amended' : 'theatre.note-signed',
    payload: { version }, detail: { noteId: note.id, dayOne, ...(allergyAnswer ? { allergyAnswer } : {}) }, change: { operatedAt, surgeryAt: operatedAt, dayOneNeed: need },
  })
  if (!amendment) await queueAfterSurgery(tx, ctx, { ...loaded, pathway: changed }, operatedAt)
  return { note, siteId: pathway.siteId }
}

/** Drops that an allergy of the record touches are prescribed only with an answer. */
function requireAllergyAnswer({ patient }: LoadedPathway, { drops, allergyAnswer }: SignNoteBody): void {
  const touched = allergiesTouched(drops, patient.alerts.filter(alert => alert.kind === 'allergy').map(alert => alert.words))
  if (touched.length && allergyAnswer.length < 3) throw new DomainError('theatre.explanation-needed', 'A recorded allergy touches these drops: choose others, or say why.', { fields: [{ field: 'allergyAnswer', code: 'required', message: 'Say why these drops are prescribed in spite of the allergy.' }], detail: { touched } })
}

/** The id of the address is no field of the note. */
function withoutPathway(input: SignNoteBody): SignNoteBody {
  const { pathwayId: _pathwayId, ...rest } = input as SignNoteBody & { pathwayId?: string }
  return rest
}

function requireTurn({ pathway }: LoadedPathway, last: typeof operationNotes.$inferSelect | undefined, live: typeof theatreCases.$inferSelect | undefined, amendment: Amendment | undefined): void {
  if (amendment) {
    if (!last || last.version !== amendment.baseVersion) throw new DomainError('theatre.stale', 'Somebody amended this note meanwhile. Look at the newest version.', { detail: { current: last ? { version: last.version } : null } })
    return
  }
  if (last) throw new DomainError('theatre.already-signed', 'This note is already signed. Amend it instead.', { detail: { current: { version: last.version } } })
  if (pathway.stage !== 'surgery') throw new DomainError('pathway.transition-not-allowed', 'The eye is not ready for surgery yet: see what is missing.')
  if (!live) throw new DomainError('theatre.requirements-unmet', 'This eye is on no theatre list.')
}

async function queueAfterSurgery(tx: Transaction, ctx: ServiceContext, { pathway, patient, site }: LoadedPathway, operatedAt: Date): Promise<void> {
  await withdrawMessages(tx, { pathwayId: pathway.id, kinds: ['surgery.reminder'], why: 'changed', now: ctx.now })
  const surgeryDate = Temporal.Instant.fromEpochMilliseconds(operatedAt.getTime()).toZonedDateTimeISO(site.zone).toPlainDate().toString()
  const about = { patient, pathway, site, now: ctx.now }
  await queuePatientMessages(tx, { ...about, occasion: { kind: 'surgery-done', surgeryDate }, subjectKey: `pathway:${pathway.id}`, values: {} })
  // Booked before the operation: the evening text could not be planned then.
  const [booked] = await tx.select().from(visits).where(and(eq(visits.pathwayId, pathway.id), eq(visits.kind, 'day-one'), inArray(visits.state, liveVisitStates))).limit(1)
  if (!booked) return
  const words = visitWords(booked.startsAt, site.zone, languages.find(each => each === patient.language) ?? 'en')
  await queuePatientMessages(tx, { ...about, visit: booked, occasion: { kind: 'note-signed', surgeryDate, signedAt: ctx.now }, subjectKey: `visit:${booked.id}`, values: { date: words.date, time: words.time, place: site.name } })
}

const sameModel = (left: string, right: string) => left.trim().toLowerCase() === right.trim().toLowerCase()
const refuse = (field: string, message: string) => new DomainError('theatre.invalid', message, { fields: [{ field, code: 'out-of-range', message }] })
