import { inboundTexts, symptomChecks } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { requireLink } from '#server/services/messaging/load-link'
import { classifyReply } from '#shared/domain/messaging/reply'
import { readSymptoms, symptomIds } from '#shared/domain/messaging/symptoms'
import type { SymptomId, SymptomRoute } from '#shared/domain/messaging/symptoms'

export interface SymptomsInput { token: string, linkId: string | undefined, symptoms: SymptomId[], words: string }

/**
 * Keeps what the patient says, and in the same transaction raises what it raises. It cancels nothing that is booked. Free words
 * always reach a person; words of worry among them raise what a text of worry raises.
 */
export async function answerSymptoms(ctx: SystemContext, input: SymptomsInput): Promise<{ route: SymptomRoute }> {
  const reading = readAll(input)
  const siteId = await ctx.db.transaction(async (tx) => {
    const { patient, pathway, site, visit } = await requireLink(tx, { ...input, now: ctx.now })
    const [kept] = await tx.insert(symptomChecks).values({
      patientId: patient.id, pathwayId: pathway.id, answers: Object.fromEntries(symptomIds.map(id => [id, input.symptoms.includes(id)])), urgency: reading.urgency, onNurseList: reading.nurseWords, words: input.words, at: ctx.now,
    }).returning({ id: symptomChecks.id })
    if (reading.reasons.length) await raiseEscalation(tx, { pathwayId: pathway.id, reasons: reading.reasons, raisedBy: null, now: ctx.now })
    if (reading.nurseWords && kept) await tx.insert(inboundTexts).values({ providerId: `page:${kept.id}`, fromNumber: 'page', patientId: patient.id, visitId: visit?.id ?? null, siteId: site.id, body: `On their page: ${reading.nurseWords}`, meaning: reading.worried ? 'worried' : 'words', receivedAt: ctx.now })
    await appendAudit(tx, { at: ctx.now, event: 'messaging.symptoms-answered', personId: null, subjectKind: 'pathway', subjectId: pathway.id, siteId: site.id, payload: { route: reading.route } })
    return site.id
  })
  await Promise.all([notifyLive(ctx.db, 'escalation', siteId, []), notifyLive(ctx.db, 'message', siteId, [])])
  return { route: reading.route }
}

/** The boxes and the free words together: the more urgent counts. */
function readAll({ symptoms, words }: SymptomsInput) {
  const reading = readSymptoms(symptoms)
  const nurseWords = [reading.nurseWords, words].filter(Boolean).join(' ') || null
  const worried = words !== '' && classifyReply(words).meaning === 'worried'
  if (!worried) return { ...reading, nurseWords, worried, route: reading.route === 'none' && nurseWords ? 'nurse' as const : reading.route }
  return { ...reading, urgency: 'now' as const, nurseWords, worried, route: 'now' as const, reasons: [...reading.reasons, { ruleId: 'patient.worried', ruleVersion: 1, urgency: 'now' as const, sentence: 'The patient wrote that something is wrong: somebody rings within the hour.', source: 'rules table 3; proposed', findings: { onPage: true } }] }
}
