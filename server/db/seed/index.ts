import { sql } from 'drizzle-orm'
import type { Database } from '#server/db/client'
import { sites } from '#server/db/schema/index'
import { seedScenario } from '#server/db/seed/seed-scenario'
import { seededDay } from '#server/db/seed/seed-times'
import { seedUnit } from '#server/db/seed/seed-unit'

/** Loads the demo scenario round `today` in one transaction; with rows already there it does nothing. */
export async function seedDemo(db: Database, now: Date): Promise<'loaded' | 'already-there'> {
  const [found] = await db.select({ n: sql<number>`count(*)::int` }).from(sites)
  if (found && found.n > 0) return 'already-there'
  const today = seededDay(now)
  await db.transaction(async (tx) => {
    await seedUnit(tx, today)
    await seedScenario(tx, { today, now })
  })
  return 'loaded'
}
