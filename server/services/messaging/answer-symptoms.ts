import { inboundTexts, symptomChecks } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { requireLink } from '#server/services/messaging/load-link'
import { readSymptoms, symptomIds } from '#shared/domain/messaging/symptoms'
import type { SymptomId, SymptomRoute } from '#shared/domain/messaging/symptoms'

/** Keeps what the patient says, and in the same transaction raises what it raises. It cancels nothing that is booked. */
export async function answerSymptoms(ctx: SystemContext, input: { token: string, linkId: string | undefined, symptoms: SymptomId[] }): Promise<{ route: SymptomRoute }> {
  const reading = readSymptoms(input.symptoms)
  const siteId = await ctx.db.transaction(async (tx) => {
    const { patient, pathway, site, visit } = await requireLink(tx, { ...input, now: ctx.now })
    const [kept] = await tx.insert(symptomChecks).values({
      patientId: patient.id, pathwayId: pathway.id, answers: Object.fromEntries(symptomIds.map(id => [id, input.symptoms.includes(id)])), urgency: reading.urgency, onNurseList: reading.nurseWords, at: ctx.now,
    }).returning({ id: symptomChecks.id })
    if (reading.reasons.length) await raiseEscalation(tx, { pathwayId: pathway.id, reasons: reading.reasons, raisedBy: null, now: ctx.now })
    if (reading.nurseWords && kept) await tx.insert(inboundTexts).values({ providerId: `page:${kept.id}`, fromNumber: 'page', patientId: patient.id, visitId: visit?.id ?? null, siteId: site.id, body: `On their page: ${reading.nurseWords}`, meaning: 'words', receivedAt: ctx.now })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.symptoms-answered', personId: null, subjectKind: 'pathway', subjectId: pathway.id, siteId: site.id, payload: { route: reading.route } })
    return site.id
  })
  await Promise.all([notifyLive(ctx.db, 'escalation', siteId, []), notifyLive(ctx.db, 'message', siteId, [])])
  return { route: reading.route }
}
