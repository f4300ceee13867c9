import { and, asc, desc, eq, inArray, ne } from 'drizzle-orm'
import { consents, lensPlans, pathways, patients, people, riskAssessments, sites, theatreCases } from '#server/db/schema/index'
import type { ServiceContext } from '#server/services/context'
import { loadCheck } from '#server/services/theatre/finish-case'
import { findCase } from '#server/services/theatre/load-case'

/** Everything that the people in the room need for the check of one case. */
export async function getSafetyCheck(ctx: ServiceContext, caseId: string) {
  const { theatreCase, list } = await findCase(ctx.db, ctx, caseId)
  const { pathwayId } = theatreCase
  const [[record], [plan], [consent], [risk], check, order, staff] = await Promise.all([
    ctx.db.select({ pathway: pathways, patient: patients, site: sites }).from(pathways).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId)).where(eq(pathways.id, pathwayId)),
    ctx.db.select().from(lensPlans).where(eq(lensPlans.pathwayId, pathwayId)).orderBy(desc(lensPlans.version)).limit(1),
    ctx.db.select().from(consents).where(eq(consents.pathwayId, pathwayId)).orderBy(desc(consents.version)).limit(1),
    ctx.db.select().from(riskAssessments).where(eq(riskAssessments.pathwayId, pathwayId)).orderBy(desc(riskAssessments.version)).limit(1),
    loadCheck(ctx.db, caseId),
    ctx.db.select({ id: theatreCases.id }).from(theatreCases).where(and(eq(theatreCases.listId, list.id), ne(theatreCases.state, 'cancelled'))).orderBy(asc(theatreCases.position), asc(theatreCases.id)),
    ctx.db.select({ id: people.id, name: people.name }).from(people).where(eq(people.id, list.surgeonId)),
  ])
  const signers = [...new Set([...check.steps.map(each => each.signedBy), ...check.scans.map(each => each.scannedBy), ...check.stops.flatMap(each => [each.stop.raisedBy, ...each.explanation ? [each.explanation.signedBy] : []]), ...plan ? [plan.signedBy] : [], ...consent ? [consent.signedBy] : []])]
  const named = signers.length ? await ctx.db.select({ id: people.id, name: people.name }).from(people).where(inArray(people.id, signers)) : []
  return { theatreCase, list, surgeonName: staff[0]?.name ?? '', record: record!, plan, consent, risk, check, place: order.findIndex(each => each.id === caseId) + 1, of: order.length, nameOf: new Map(named.map(each => [each.id, each.name])) }
}
