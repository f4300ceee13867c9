import { randomUUID } from 'node:crypto'
import { drizzle } from 'drizzle-orm/node-postgres'
import pg from 'pg'
import type { Database } from '#server/db/client'
import * as schema from '#server/db/schema/index'
import { createTestDatabase } from '#tests/support/product'

/** A database of its own at the newest schema, without the demo's people, as the application's role sees it. */
export async function openMessagingDatabase() {
  const made = await createTestDatabase()
  // Append-only tables refuse to be emptied; as a replica the owner is not asked.
  const { rows } = await made.pool.query<{ name: string }>('select tablename as name from pg_tables where schemaname = \'public\' and tablename <> \'demo_clock\'')
  const client = await made.pool.connect()
  await client.query(`set session_replication_role = replica; truncate ${rows.map(row => `"${row.name}"`).join(', ')} cascade; set session_replication_role = origin`).finally(() => client.release())
  const pools: pg.Pool[] = []
  const connect = (): Database => {
    const pool = new pg.Pool({ connectionString: made.appUrl, max: 8 })
    pool.on('error', () => undefined)
    pools.push(pool)
    return drizzle(pool, { schema })
  }
  return {
    url: made.appUrl, db: connect(), connect,
    close: async () => {
      await Promise.all(pools.map(pool => pool.end()))
      await made.drop()
    },
  }
}

export const ids = { site: randomUUID(), patient: randomUUID(), pathway: randomUUID(), visit: randomUUID(), person: randomUUID() }

/** One site, one surgeon, one patient with one operated eye and a visit tomorrow. */
export async function addPatient(db: Database, now: Date, changes: Partial<typeof schema.patients.$inferInsert> = {}) {
  await db.insert(schema.sites).values({ id: ids.site, code: 'ferncombe', name: 'Ferncombe Eye Unit', zone: 'Europe/London', phone: '01632 960140', emergencyPhone: '01632 960141', address: 'Orchard Rise', directions: 'Level 1', isHospital: true })
  await db.insert(schema.people).values({ id: ids.person, name: 'Tobias Quillfeather', title: 'Surgeon', email: 't.quillfeather@example.org', phone: '+447700900655' })
  await db.insert(schema.roles).values({ personId: ids.person, role: 'surgeon', siteId: ids.site })
  await db.insert(schema.patients).values({ id: ids.patient, recordNumber: 'F-1', name: 'Winifred Saltonby', birthDate: '1955-02-03', phone: '+447700900377', email: 'w.saltonby@example.org', messageConsent: true, siteId: ids.site, createdAt: now, ...changes })
  await db.insert(schema.pathways).values({ id: ids.pathway, patientId: ids.patient, eye: 'right', siteId: ids.site, surgeonId: ids.person, referredAt: now, stageSince: now, operatedAt: new Date(now.getTime() - 86_400_000) })
  await db.insert(schema.visits).values({ id: ids.visit, pathwayId: ids.pathway, patientId: ids.patient, siteId: ids.site, kind: 'day-one', startsAt: new Date(now.getTime() + 86_400_000), bookedAt: now })
}

/** Texts that are due now, each to its own number and with its own words. */
export async function addDueTexts(db: Database, count: number, now: Date): Promise<void> {
  await db.insert(schema.messages).values(Array.from({ length: count }, (_, index) => ({
    kind: 'alert.surgeon' as const, recipientKey: `person:${ids.person}`, subjectKey: `escalation:${index}`, occasion: 'first', channel: 'text' as const, personId: ids.person, siteId: ids.site,
    toAddress: `+447700${String(900_000 + index)}`, body: `Escalation ${index}.`, dueAt: now, expiresAt: new Date(now.getTime() + 3_600_000), createdAt: now,
  })))
}
