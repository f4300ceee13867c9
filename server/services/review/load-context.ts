import { and, desc, eq, gte, ne, sql } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { biometries, escalations, lensPlans, operationNotes, reviews, theatreCases } from '#server/db/schema/index'
import type { LoadedVisit } from '#server/services/visit/load-visit'
import { daysSince } from '#shared/domain/visit/site-day'
import { riskReasons } from '#shared/domain/review/vocabulary'
import type { ReviewContext, RiskReason } from '#shared/domain/review/vocabulary'

const weekMs = 7 * 86_400_000

/** What the rules must know about this eye beside the findings. One round of queries. */
export async function loadReviewContext(db: Queryable, loaded: LoadedVisit, now: Date) {
  const { visit, pathway, patient, site } = loaded
  const [[biometry], [note], [plan], [previous], [onList], [atSite]] = await Promise.all([
    db.select().from(biometries).where(eq(biometries.pathwayId, pathway.id)).orderBy(sql`${biometries.acceptedAt} desc nulls last`).limit(1),
    db.select().from(operationNotes).where(eq(operationNotes.pathwayId, pathway.id)).orderBy(desc(operationNotes.version)).limit(1),
    db.select().from(lensPlans).where(eq(lensPlans.pathwayId, pathway.id)).orderBy(desc(lensPlans.version)).limit(1),
    db.select().from(reviews).where(and(eq(reviews.pathwayId, pathway.id), ne(reviews.visitId, visit.id))).orderBy(desc(reviews.signedAt), desc(reviews.version)).limit(1),
    db.select({ n: sql<number>`count(distinct ${escalations.id})::int` }).from(escalations)
      .innerJoin(theatreCases, eq(theatreCases.pathwayId, escalations.pathwayId))
      .where(and(ne(escalations.pathwayId, pathway.id), sql`${theatreCases.listId} in (select c.list_id from theatre_cases c where c.pathway_id = ${pathway.id})`, suspected)),
    db.select({ n: sql<number>`count(*)::int` }).from(escalations)
      .where(and(eq(escalations.siteId, site.id), ne(escalations.pathwayId, pathway.id), gte(escalations.raisedAt, new Date(now.getTime() - weekMs)), suspected)),
  ])
  const operatedAt = pathway.operatedAt ?? pathway.surgeryAt
  const context: ReviewContext = {
    visitKind: visit.kind,
    daysAfterSurgery: operatedAt ? daysSince(site.zone, operatedAt, now) : 0,
    riskReasons: patient.riskReasons.filter((each): each is RiskReason => riskReasons.includes(each as RiskReason)),
    preoperative: { bestLogMar: biometry?.preoperativeLogMar ?? undefined, iopMmHg: biometry?.preoperativeIopMmHg ?? undefined },
    previous: previous ? { bestLogMar: previous.bestLogMar ?? undefined, iopMmHg: previous.iopMmHg ?? undefined, redReflex: previous.findings.redReflex, painScore: previous.findings.painScore } : undefined,
    onSteroidDrops: note ? steroidDaysLeft(note.drops, operatedAt ? daysSince(site.zone, operatedAt, now) : 0) > 0 : undefined,
    daysSinceDropsStopped: note && operatedAt ? Math.max(0, -steroidDaysLeft(note.drops, daysSince(site.zone, operatedAt, now))) || undefined : undefined,
    lensAsPlanned: note?.lensAsPlanned,
    lensDeviationExplained: note ? Boolean(note.lensDeviationExplained) : undefined,
    predictedRefractionD: plan?.predictedD,
    otherSuspectedOnList: onList?.n ?? 0,
    otherSuspectedAtSiteThisWeek: atSite?.n ?? 0,
  }
  return { context, biometry, note, plan, previous }
}

const suspected = sql`exists (select 1 from jsonb_array_elements(${escalations.reasons}) r where r->>'ruleId' in ('infection.suspected', 'segment.toxic-pattern'))`

/** Days of prescribed steroid drops still ahead; below zero, days since they ended. Common practice: names as prescribed by the site. */
function steroidDaysLeft(drops: { drug: string, days: number }[], day: number): number {
  const steroids = drops.filter(line => /dexamethasone|prednisolone|betamethasone|fluorometholone|loteprednol|steroid/i.test(line.drug))
  return steroids.length ? Math.max(...steroids.map(line => line.days)) - day : 0
}

export type LoadedContext = Awaited<ReturnType<typeof loadReviewContext>>
