import { and, asc, desc, eq, gte, inArray, sql } from 'drizzle-orm'
import type { Queryable, Transaction } from '#server/db/client'
import { messages, pathways, patients, sites, visits } from '#server/db/schema/index'
import type { Asked } from '#shared/domain/messaging/reply'
import type { StoredKind } from '#shared/domain/messaging/vocabulary'

const hourMs = 3_600_000
/** A visit that began a little while ago is still the one that is talked about. */
const visitStillMeantMs = 6 * hourMs
const askedWithinMs = 7 * 24 * hourMs
const bothAskedWithinMs = 24 * hourMs

const askAboutVisit: readonly StoredKind[] = ['surgery.reminder', 'dayone.evening', 'dayone.morning', 'visit.reminder', 'visit.changed', 'missing.patient']
const askAboutSymptoms: readonly StoredKind[] = ['safety.day3', 'safety.day7']

/** Unscoped: a text carries no session; the number is all that says who it is from. A number that two people share matches nobody by itself, but says which unit. */
export async function unscopedFindSender(tx: Transaction, from: string, now: Date) {
  const known = await tx.select({ id: patients.id, siteId: patients.siteId }).from(patients).where(eq(patients.phone, from)).orderBy(desc(patients.createdAt)).limit(20)
  const [first] = known
  if (!first || known.some(row => row.id !== first.id)) return { whose: undefined, siteId: first?.siteId ?? null }
  const found = await tx.select({ patient: patients, pathway: pathways, site: sites }).from(patients)
    .innerJoin(pathways, eq(pathways.patientId, patients.id)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(eq(patients.id, first.id)).orderBy(sql`${pathways.state} = 'closed'`, sql`${pathways.operatedAt} desc nulls last`)
  const [latest] = found
  if (!latest) return { whose: undefined, siteId: first.siteId }
  const [visit] = await tx.select().from(visits)
    .where(and(eq(visits.patientId, first.id), inArray(visits.state, ['booked', 'missing']), gte(visits.startsAt, new Date(now.getTime() - visitStillMeantMs)))).orderBy(asc(visits.startsAt)).limit(1)
  const ofVisit = visit ? found.find(row => row.pathway.id === visit.pathwayId) : undefined
  return { whose: { ...(ofVisit ?? latest), visit }, siteId: latest.site.id }
}
export type Sender = NonNullable<Awaited<ReturnType<typeof unscopedFindSender>>['whose']>

/**
 * What the last texts asked this patient. When the questions about symptoms were sent within a day of one about a visit, a bare
 * yes is read as the answer to them: taking it for the visit could hide that something is wrong, the other way costs a call.
 */
export async function lastAsked(db: Queryable, patientId: string, now: Date): Promise<Asked | undefined> {
  const asked = await db.select({ kind: messages.kind, sentAt: messages.sentAt }).from(messages)
    .where(and(eq(messages.patientId, patientId), eq(messages.recipientKey, `patient:${patientId}`), inArray(messages.kind, [...askAboutVisit, ...askAboutSymptoms]), inArray(messages.state, ['sent', 'delivered']), gte(messages.sentAt, new Date(now.getTime() - askedWithinMs))))
    .orderBy(desc(messages.sentAt)).limit(20)
  const [last] = asked
  if (!last) return undefined
  const symptoms = asked.find(each => askAboutSymptoms.includes(each.kind))
  return symptoms?.sentAt && (symptoms === last || now.getTime() - symptoms.sentAt.getTime() < bothAskedWithinMs) ? 'symptoms' : 'visit'
}
