import { and, eq, inArray, ne, notInArray, sql } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import { escalationActions, escalations, patients, theatreCases, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import type { ServiceContext } from '#server/services/context'
import { withdrawMessages } from '#server/services/messaging/queue-messages'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import { storedKinds } from '#shared/domain/messaging/vocabulary'
import type { PathwayEffect } from '#shared/domain/pathway/transitions'
import { dayBounds } from '#shared/domain/visit/site-day'

/** A letter to the referrer is no message to the patient: it leaves even when the pathway has ended. */
const toThePatient = storedKinds.filter(kind => kind !== 'letter.sent' && kind !== 'referral.question')

interface EffectInput { loaded: LoadedPathway, words: string }
type Apply = (tx: Transaction, ctx: ServiceContext, input: EffectInput) => Promise<void>

/** What each effect of a move does, in the transaction of the move. */
const effects: Readonly<Record<PathwayEffect, Apply>> = {
  cancelFutureVisits: async (tx, ctx, { loaded, words }) => {
    const cancelled = await tx.update(visits).set({ state: 'cancelled', cancelReason: words, rowVersion: sql`${visits.rowVersion} + 1` })
      .where(and(eq(visits.pathwayId, loaded.pathway.id), notInArray(visits.state, ['done', 'cancelled', 'moved']))).returning({ id: visits.id, siteId: visits.siteId })
    for (const visit of cancelled) await appendAudit(tx, { at: ctx.now, event: 'visit.cancelled', personId: ctx.actor.personId, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId })
  },
  withdrawMessages: (tx, ctx, { loaded }) => withdrawMessages(tx, { pathwayId: loaded.pathway.id, kinds: toThePatient, why: 'closed', now: ctx.now }),
  closeEscalations: async (tx, ctx, { loaded, words }) => {
    const closed = await tx.update(escalations).set({ state: 'closed', closedBy: ctx.actor.personId, closedAt: ctx.now, closingWords: words, nextRungAt: null, rowVersion: sql`${escalations.rowVersion} + 1` })
      .where(and(eq(escalations.pathwayId, loaded.pathway.id), ne(escalations.state, 'closed'))).returning({ id: escalations.id, siteId: escalations.siteId })
    for (const escalation of closed) {
      await tx.insert(escalationActions).values({ escalationId: escalation.id, at: ctx.now, kind: 'closed', personId: ctx.actor.personId, words })
      await appendAudit(tx, { at: ctx.now, event: 'escalation.closed', personId: ctx.actor.personId, subjectKind: 'escalation', subjectId: escalation.id, siteId: escalation.siteId })
      await withdrawMessages(tx, { escalationId: escalation.id, why: 'closed', now: ctx.now })
    }
  },
  removeFromTheatreList: async (tx, ctx, { loaded, words }) => {
    const removed = await tx.update(theatreCases).set({ state: 'cancelled', cancelReason: words })
      .where(and(eq(theatreCases.pathwayId, loaded.pathway.id), inArray(theatreCases.state, ['planned', 'in-theatre']))).returning({ id: theatreCases.id })
    for (const one of removed) await appendAudit(tx, { at: ctx.now, event: 'theatre.case-cancelled', personId: ctx.actor.personId, subjectKind: 'case', subjectId: one.id, siteId: loaded.pathway.siteId })
  },
  withdrawSafetyNet: (tx, ctx, { loaded }) => withdrawMessages(tx, { pathwayId: loaded.pathway.id, kinds: ['safety.day3', 'safety.day7'], why: 'discharged', now: ctx.now }),
  stopMessagesToPatient: async (tx, ctx, { loaded }) => {
    const { date } = dayBounds(loaded.site.zone, ctx.now)
    await tx.update(patients).set({ diedOn: sql`coalesce(${patients.diedOn}, ${date}::date)`, rowVersion: sql`${patients.rowVersion} + 1` }).where(eq(patients.id, loaded.patient.id))
    await withdrawMessages(tx, { patientId: loaded.patient.id, kinds: toThePatient, why: 'died', now: ctx.now })
    await appendAudit(tx, { at: ctx.now, event: 'patient.changed', personId: ctx.actor.personId, subjectKind: 'patient', subjectId: loaded.patient.id, siteId: loaded.pathway.siteId })
  },
}

export async function applyEffects(tx: Transaction, ctx: ServiceContext, wanted: readonly PathwayEffect[], input: EffectInput): Promise<void> {
  for (const effect of wanted) await effects[effect](tx, ctx, input)
}
