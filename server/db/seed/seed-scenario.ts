import type { Transaction } from '#server/db/client'
import { clinicSessions, sessionPlaces } from '#server/db/schema/index'
import { seedId } from '#server/db/seed/seed-id'

export interface ScenarioTimes { today: Date, now: Date }

const dayMs = 86_400_000
const minuteMs = 60_000

/** Clinic sessions for four weeks: day-one checks each morning, follow-up each afternoon. */
export async function seedScenario(tx: Transaction, times: ScenarioTimes): Promise<void> {
  for (let day = 0; day < 28; day++) {
    for (const [site, kind, hour, places, room] of [['ferncombe', 'day-one', 8.5, 18, 'Room 1'], ['ferncombe', 'follow-up', 13, 12, 'Room 1'], ['tidemill', 'day-one', 10, 6, 'Room A'], ['tidemill', 'follow-up', 14, 8, 'Room A']] as const) {
      const startsAt = new Date(times.today.getTime() + day * dayMs + hour * 60 * minuteMs)
      const sessionId = seedId(`session:${site}:${kind}:${day}`)
      await tx.insert(clinicSessions).values({ id: sessionId, siteId: seedId(`site:${site}`), kind, room, startsAt, endsAt: new Date(startsAt.getTime() + places * 10 * minuteMs) })
      await tx.insert(sessionPlaces).values(Array.from({ length: places }, (_, place) => ({ id: seedId(`place:${site}:${kind}:${day}:${place}`), sessionId, startsAt: new Date(startsAt.getTime() + place * 10 * minuteMs), minutes: 10 })))
    }
  }
}
