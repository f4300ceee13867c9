import { and, asc, eq, gt, lte } from 'drizzle-orm'
import type { Queryable } from '#server/db/client'
import { people, roles, shifts } from '#server/db/schema/index'

export interface Reachable { id: string, name: string, phone: string | null, email: string }

/** Who stands on one rung of a site's rota at this instant, if anybody does. */
export async function personOnRung(db: Queryable, siteId: string, rung: number, at: Date): Promise<Reachable | undefined> {
  const [row] = await db.select({ id: people.id, name: people.name, phone: people.phone, email: people.email }).from(shifts)
    .innerJoin(people, eq(people.id, shifts.personId))
    .where(and(eq(shifts.siteId, siteId), eq(shifts.rung, rung), lte(shifts.startsAt, at), gt(shifts.endsAt, at)))
  return row
}

export async function clinicalLeadOf(db: Queryable, siteId: string): Promise<Reachable | undefined> {
  const [row] = await db.select({ id: people.id, name: people.name, phone: people.phone, email: people.email }).from(roles)
    .innerJoin(people, eq(people.id, roles.personId))
    .where(and(eq(roles.siteId, siteId), eq(roles.role, 'clinical-lead'))).orderBy(asc(people.name)).limit(1)
  return row
}

/** Who is told first: the rota's first rung, else the operating surgeon, else the clinical lead. */
export async function firstToTell(db: Queryable, siteId: string, surgeonId: string | null, at: Date): Promise<Reachable | undefined> {
  const onRota = await personOnRung(db, siteId, 1, at)
  if (onRota) return onRota
  if (surgeonId) {
    const [surgeon] = await db.select({ id: people.id, name: people.name, phone: people.phone, email: people.email }).from(people).where(eq(people.id, surgeonId))
    if (surgeon) return surgeon
  }
  return clinicalLeadOf(db, siteId)
}
