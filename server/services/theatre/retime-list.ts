import { and, asc, eq, inArray, isNull } from 'drizzle-orm'
import type { Transaction } from '#server/db/client'
import type { theatreLists } from '#server/db/schema/index';
import { pathways, patients, sites, theatreCases } from '#server/db/schema/index'
import { queuePatientMessages, withdrawMessages } from '#server/services/messaging/queue-messages'
import { turnoverMinutes } from '#shared/domain/theatre/day-plan'
import { languages } from '#shared/domain/messaging/vocabulary'
import { visitWords } from '#shared/domain/messaging/visit-words'

type List = typeof theatreLists.$inferSelect

/**
 * Gives every waiting case of a list its planned start, and every patient whose time changed new reminders instead of the old.
 * Called in the transaction that changed the list, with the list locked.
 */
export async function retimeList(tx: Transaction, list: List, now: Date): Promise<void> {
  const rows = await tx.select({ theatreCase: theatreCases, pathway: pathways, patient: patients, site: sites }).from(theatreCases)
    .innerJoin(pathways, eq(pathways.id, theatreCases.pathwayId)).innerJoin(patients, eq(patients.id, pathways.patientId)).innerJoin(sites, eq(sites.id, pathways.siteId))
    .where(and(eq(theatreCases.listId, list.id), inArray(theatreCases.state, ['planned', 'in-theatre', 'done']))).orderBy(asc(theatreCases.position))
  let minutes = 0
  for (const { theatreCase, pathway, patient, site } of rows) {
    const startsAt = new Date(list.startsAt.getTime() + minutes * 60_000)
    minutes += theatreCase.plannedMinutes + turnoverMinutes
    if (theatreCase.state !== 'planned' || pathway.operatedAt || pathway.surgeryAt?.getTime() === startsAt.getTime()) continue
    const [changed] = await tx.update(pathways).set({ surgeryAt: startsAt, surgeonId: list.surgeonId }).where(and(eq(pathways.id, pathway.id), isNull(pathways.operatedAt))).returning()
    if (!changed) continue
    await withdrawMessages(tx, { pathwayId: pathway.id, kinds: ['surgery.reminder'], why: 'moved', now })
    const words = visitWords(startsAt, site.zone, languages.find(each => each === patient.language) ?? 'en')
    await queuePatientMessages(tx, { occasion: { kind: 'surgery', startsAt }, patient, pathway: changed, site, subjectKey: `case:${theatreCase.id}`, values: { date: words.date, time: words.time, place: site.name }, now })
  }
}
