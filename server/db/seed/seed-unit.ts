import type { Transaction } from '#server/db/client'
import { people, practices, roles, shifts, sites } from '#server/db/schema/index'
import accounts from '#server/db/seed/accounts'
import { seedId } from '#server/db/seed/seed-id'
import { hashPassword } from '#server/gateways/passwords'
import type { RoleName } from '#shared/domain/people/vocabulary'

const zone = 'Europe/London'
const dayMs = 86_400_000

/** Sites, one community practice, the demo people with their roles, and a rota with one gap. */
export async function seedUnit(tx: Transaction, today: Date): Promise<void> {
  await tx.insert(sites).values([
    { id: seedId('site:ferncombe'), code: 'ferncombe', name: 'Ferncombe Eye Unit', zone, phone: '01632 960140', emergencyPhone: '01632 960141', address: 'Ferncombe Eye Unit, Orchard Rise, Ferncombe', directions: 'Level 1, follow the yellow line from the main entrance. Blue badge places are by the north door.', isHospital: true, settings: { identifierCheck: 'nhs-number', travelMinutes: { [seedId('site:tidemill')]: 25 } } },
    { id: seedId('site:tidemill'), code: 'tidemill', name: 'Tidemill Outreach Clinic', zone, phone: '01632 960150', emergencyPhone: '01632 960141', address: 'Tidemill Health Centre, Quay Street, Tidemill', directions: 'Ground floor, second door on the left. The bus stops outside.', isHospital: false, settings: { identifierCheck: 'nhs-number', travelMinutes: { [seedId('site:ferncombe')]: 25 } } },
  ])
  await tx.insert(practices).values({ id: seedId('practice:harbour-lane'), name: 'Harbour Lane Opticians', phone: '01632 960160', address: '4 Harbour Lane, Tidemill' })

  const passwordHash = await hashPassword(accounts.password)
  for (const account of accounts.accounts) {
    const personId = seedId(`person:${account.email}`)
    await tx.insert(people).values({ id: personId, name: account.name, title: account.title, email: account.email, phone: account.phone, passwordHash })
    await tx.insert(roles).values(account.roles.map(([role, place = '']) => ({
      id: seedId(`role:${account.email}:${role}:${place}`),
      personId,
      role: role as RoleName,
      siteId: place.startsWith('practice:') ? null : seedId(`site:${place}`),
      practiceId: place.startsWith('practice:') ? seedId(place) : null,
    })))
  }

  const rungs: [number, string][] = [[1, 'tobias.quillfeather@example.org'], [2, 'ada.renshawe@example.org'], [3, 'leopold.strake@example.org']]
  for (const site of ['ferncombe', 'tidemill']) {
    for (const [rung, email] of rungs) {
      for (let week = -1; week < 5; week++) {
        // One week of the second rung at Tidemill is left open: the rota page shows the gap.
        if (site === 'tidemill' && rung === 2 && week === 2) continue
        await tx.insert(shifts).values({
          id: seedId(`shift:${site}:${rung}:${week}`), siteId: seedId(`site:${site}`), rung, personId: seedId(`person:${email}`),
          startsAt: new Date(today.getTime() + week * 7 * dayMs), endsAt: new Date(today.getTime() + (week + 1) * 7 * dayMs),
        })
      }
    }
  }
}
