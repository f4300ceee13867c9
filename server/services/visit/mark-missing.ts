import { and, asc, eq, sql } from 'drizzle-orm'
import dayjs from 'dayjs'
import timezone from 'dayjs/plugin/timezone.js'
import utc from 'dayjs/plugin/utc.js'
import type { Transaction } from '#server/db/client'
import { missingSteps, pathwayEvents, pathways, patients, sites, visits } from '#server/db/schema/index'
import { appendAudit } from '#server/services/audit/append-audit'
import { notifyLive } from '#server/services/audit/notify-live'
import type { SystemContext } from '#server/services/context'
import { raiseEscalation } from '#server/services/escalation/raise-escalation'
import { queuePatientMessages } from '#server/services/messaging/queue-messages'
import { missingPatientSteps } from '#shared/domain/visit/missing-steps'
import type { MissingStepName } from '#shared/domain/visit/missing-steps'

dayjs.extend(utc)
dayjs.extend(timezone)

/** 'proposed': so long after the booked time the steps of a day-one patient end by themselves, because nobody ended them. */
export const unattendedMinutes = 60

/**
 * Takes one late visit as far as the clock asks: missing at 20 minutes, the text when it is due, and for a day-one patient whose steps
 * nobody ended the escalation. It looks again at the locked row, so that a second run, or another machine's, changes nothing.
 */
export async function markMissing(ctx: SystemContext, visitId: string): Promise<boolean> {
  const changed = await ctx.db.transaction(async (tx) => {
    const [row] = await tx.select({ visit: visits, patient: patients, pathway: pathways, site: sites }).from(visits)
      .innerJoin(patients, eq(patients.id, visits.patientId)).innerJoin(pathways, eq(pathways.id, visits.pathwayId)).innerJoin(sites, eq(sites.id, visits.siteId))
      .where(and(eq(visits.id, visitId), sql`${visits.state} in ('booked', 'missing')`)).for('update', { of: visits, skipLocked: true })
    if (!row) return undefined
    const steps = await tx.select({ step: missingSteps.step, at: missingSteps.at }).from(missingSteps).where(eq(missingSteps.visitId, visitId)).orderBy(asc(missingSteps.at))
    const progress = missingPatientSteps(row.visit, steps.map(each => ({ step: each.step as MissingStepName, at: each.at })), ctx.now)
    if (!progress.isMissing || progress.end) return undefined
    const done: boolean[] = []
    if (row.visit.state === 'booked') done.push(await becomeMissing(tx, row, ctx.now))
    if (!progress.done.includes('text') && progress.minutesLate >= textMinutes) done.push(await sendText(tx, row, ctx.now))
    if (row.visit.kind === 'day-one' && progress.minutesLate >= unattendedMinutes) done.push(await endSteps(tx, row, ctx.now))
    return done.some(Boolean) ? row.visit.siteId : undefined
  })
  if (changed) await Promise.all([notifyLive(ctx.db, 'visit', changed, [visitId]), notifyLive(ctx.db, 'escalation', changed, [])])
  return changed !== undefined
}

const textMinutes = 25
interface LateVisit { visit: typeof visits.$inferSelect, patient: typeof patients.$inferSelect, pathway: typeof pathways.$inferSelect, site: typeof sites.$inferSelect }

async function becomeMissing(tx: Transaction, { visit }: LateVisit, now: Date): Promise<boolean> {
  await tx.update(visits).set({ state: 'missing', missingAt: now, rowVersion: sql`${visits.rowVersion} + 1` }).where(eq(visits.id, visit.id))
  await tx.insert(pathwayEvents).values({ pathwayId: visit.pathwayId, at: now, kind: 'visit-missing', words: 'Not here 20 minutes after the booked time', detail: { visitId: visit.id } })
  await appendAudit(tx, { at: now, event: 'visit.missing', personId: null, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId })
  return true
}

/** Neutral words, and only where the patient takes texts; else the row says that a person must ring. */
async function sendText(tx: Transaction, { visit, patient, pathway, site }: LateVisit, now: Date): Promise<boolean> {
  const local = dayjs(visit.startsAt).tz(site.zone)
  await queuePatientMessages(tx, { occasion: { kind: 'visit-missing', startsAt: visit.startsAt }, patient, pathway, site, visit, subjectKey: `visit:${visit.id}`, values: { date: local.format('dddd D MMMM'), time: local.format('HH:mm'), place: site.name }, now })
  const takesTexts = patient.messageConsent === true && patient.textsStoppedAt === null && patient.diedOn === null && Boolean(patient.phone)
  await tx.insert(missingSteps).values({ visitId: visit.id, step: 'text', outcome: takesTexts ? 'Sent by itself' : 'Not sent: takes no texts', at: now, personId: null })
  await appendAudit(tx, { at: now, event: 'visit.step-logged', personId: null, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId, payload: { step: 'text' } })
  return true
}

async function endSteps(tx: Transaction, { visit }: LateVisit, now: Date): Promise<boolean> {
  const steps = missingPatientSteps(visit, [{ step: 'not-found', at: now }], now)
  await tx.insert(missingSteps).values({ visitId: visit.id, step: 'not-found', outcome: `Nobody ended the steps within ${unattendedMinutes} minutes`, at: now, personId: null })
  await appendAudit(tx, { at: now, event: 'visit.step-logged', personId: null, subjectKind: 'visit', subjectId: visit.id, siteId: visit.siteId, payload: { step: 'not-found' } })
  if (steps.raises) await raiseEscalation(tx, { pathwayId: visit.pathwayId, raisedBy: null, now, reasons: [steps.raises] })
  return true
}
