import { and, desc, eq, gte, inArray, ne, sql } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { biometries, consents, escalations, lensPlans, messages, operationNotes, pathwayEvents, pathways, referrals, reviews, riskAssessments, theatreCases, theatreLists, visits } from '#server/db/schema/index'
import type { LoadedPathway } from '#server/services/pathway/load-pathway'
import type { PathwayFacts } from '#shared/domain/pathway/facts'
import { redFlagsAnswered } from '#shared/domain/referral/red-flags'
import { liveVisitStates } from '#shared/domain/visit/vocabulary'

/** Every record of one pathway that its requirements ask about, the current version of each. One round of queries. */
export async function loadRecords(db: Queryable, { pathway }: LoadedPathway) {
  const of = pathway.id
  const [[referral], [biometry], [plan], [risk], [consent], [onList], [note], visitRows, reviewRows, escalationRows, [letter], [checked], [other]] = await Promise.all([
    db.select().from(referrals).where(eq(referrals.pathwayId, of)),
    db.select().from(biometries).where(eq(biometries.pathwayId, of)).orderBy(desc(biometries.version)).limit(1),
    db.select().from(lensPlans).where(eq(lensPlans.pathwayId, of)).orderBy(desc(lensPlans.version)).limit(1),
    db.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, of)).orderBy(desc(riskAssessments.version)).limit(1),
    db.select().from(consents).where(eq(consents.pathwayId, of)).orderBy(desc(consents.version)).limit(1),
    db.select({ theatreCase: theatreCases, list: theatreLists }).from(theatreCases).innerJoin(theatreLists, eq(theatreLists.id, theatreCases.listId))
      .where(and(eq(theatreCases.pathwayId, of), ne(theatreCases.state, 'cancelled'))).orderBy(desc(theatreLists.startsAt)).limit(1),
    db.select().from(operationNotes).where(eq(operationNotes.pathwayId, of)).orderBy(desc(operationNotes.version)).limit(1),
    db.select().from(visits).where(and(eq(visits.pathwayId, of), inArray(visits.state, liveVisitStates))).orderBy(visits.startsAt),
    // The newest version of each visit's review: an amendment is what counts.
    db.selectDistinctOn([reviews.visitId], { review: reviews, kind: visits.kind }).from(reviews).innerJoin(visits, eq(visits.id, reviews.visitId)).where(eq(reviews.pathwayId, of)).orderBy(reviews.visitId, desc(reviews.version)),
    db.select().from(escalations).where(and(eq(escalations.pathwayId, of), ne(escalations.state, 'closed'))),
    // A letter of an earlier discharge is not the letter of this one.
    db.select({ id: messages.id, state: messages.state, sentAt: messages.sentAt, createdAt: messages.createdAt }).from(messages)
      .where(and(eq(messages.pathwayId, of), eq(messages.kind, 'letter.sent'), gte(messages.createdAt, pathway.stageSince))).orderBy(desc(messages.createdAt)).limit(1),
    db.select({ at: pathwayEvents.at, words: pathwayEvents.words }).from(pathwayEvents).where(and(eq(pathwayEvents.pathwayId, of), eq(pathwayEvents.kind, 'first-check-recorded'))).orderBy(desc(pathwayEvents.at)).limit(1),
    db.select({ id: pathways.id }).from(pathways).where(and(eq(pathways.patientId, pathway.patientId), eq(pathways.eye, pathway.eye), ne(pathways.id, of), ne(pathways.state, 'closed'), sql`${pathways.stage} <> 'discharge'`)).limit(1),
  ])
  return { referral, biometry, plan, risk, consent, onList, note, visits: visitRows, reviews: reviewRows, escalations: escalationRows, letter, firstCheck: checked, otherOpenPathwayId: other?.id }
}
export type PathwayRecords = Awaited<ReturnType<typeof loadRecords>>

/** The records as the transition table asks about them. What is not there is not met. */
export function factsOf({ pathway, patient }: LoadedPathway, records: PathwayRecords): PathwayFacts {
  const { referral, biometry, plan, note } = records
  const reviewsOf = (kind: string) => records.reviews.filter(each => each.kind === kind).map(each => each.review)
  const finals = reviewsOf('final')
  return {
    triageAccepted: referral?.triageDecision === 'accepted',
    eyeStated: Boolean(pathway.eye),
    contactRouteRecorded: Boolean(patient.phone || patient.email || patient.address.trim()),
    messageConsentRecorded: patient.messageConsent !== null,
    redFlagsAnswered: referral !== undefined && redFlagsAnswered(referral.redFlags),

    biometryAccepted: Boolean(biometry?.acceptedAt),
    plausibilityWarningsOpen: biometry?.warnings.filter(each => !biometry.explanations[each.ruleId]).length ?? 0,
    // A plan made from measurements that were repeated since is not a plan for this eye.
    lensPlanSigned: plan !== undefined && plan.biometryId === biometry?.id,
    secondCheckSettled: plan !== undefined && (plan.secondCheckAgrees === 'agrees' || Boolean(plan.differenceExplained)),
    riskAssessed: records.risk !== undefined,
    consentRecorded: records.consent !== undefined,
    onTheatreList: records.onList !== undefined,

    operationNoteSigned: note !== undefined,
    lensAsPlanned: note?.lensAsPlanned === true,
    lensDeviationExplained: Boolean(note?.lensDeviationExplained),
    dropsPrescribed: (note?.drops.length ?? 0) > 0,
    dayOneBooked: records.visits.some(visit => visit.kind === 'day-one'),
    otherFirstCheckDecided: Boolean(pathway.otherFirstCheck),

    dayOneReviewSigned: reviewsOf('day-one').length > 0,
    otherFirstCheckRecorded: records.firstCheck !== undefined,
    unacknowledgedUrgentEscalations: records.escalations.filter(each => each.state === 'open' && each.urgency !== 'this-week').length,
    nextVisitBooked: records.visits.some(visit => visit.state === 'booked' && (visit.kind === 'first-week' || visit.kind === 'final')),

    finalRefractionRecorded: finals.some(review => review.findings.refractionSphereD !== undefined),
    finalAcuityRecorded: finals.some(review => review.bestLogMar !== null),
    openEscalations: records.escalations.length,
    fellowEyeDecisionRecorded: Boolean(pathway.fellowEyeDecision),
    dischargeLetterSent: records.letter?.state === 'sent' || records.letter?.state === 'delivered',

    otherOpenPathwayOfEye: records.otherOpenPathwayId !== undefined,
  }
}
