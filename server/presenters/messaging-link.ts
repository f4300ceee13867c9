import type { LoadedLink } from '#server/services/messaging/load-link'
import type { LinkPage } from '#shared/contracts/messaging'
import { readSymptoms, symptoms } from '#shared/domain/messaging/symptoms'

/** What a patient may read on their own page: no finding, no diagnosis, no other eye's record. */
export function presentLinkPage(loaded: LoadedLink | undefined, now: Date): LinkPage {
  if (!loaded) return { opened: false }
  const { patient, pathway, visit, site, told } = loaded
  const said = told ? symptoms.filter(each => told.answers[each.id]) : []
  const surgeryAt = pathway.operatedAt ?? pathway.surgeryAt
  return {
    opened: true,
    page: {
      firstName: patient.name.split(' ')[0] ?? patient.name,
      now: now.toISOString(),
      unit: { name: site.name, phone: site.phone, emergencyPhone: site.emergencyPhone, address: site.address, directions: site.directions, zone: site.zone },
      eye: pathway.eye,
      visit: visit ? { id: visit.id, kind: visit.kind, startsAt: visit.startsAt.toISOString(), answered: visit.confirmedAt ? 'coming' : visit.cannotComeAt ? 'cannot-come' : null } : null,
      surgeryAt: surgeryAt?.toISOString() ?? null,
      afterSurgery: Boolean(surgeryAt && surgeryAt <= now),
      toldUs: told && said.length ? { at: told.at.toISOString(), route: readSymptoms(said.map(each => each.id)).route, words: said.map(each => each.words) } : null,
    },
  }
}
