import type { LoadedLink } from '#server/services/messaging/load-link'
import type { LinkPage } from '#shared/contracts/messaging'
import { pageWords } from '#shared/domain/messaging/page-words'
import type { PageWordKey } from '#shared/domain/messaging/page-words-keys'
import { inZone } from '#shared/domain/messaging/quiet-hours'
import { readSymptoms, symptomIds } from '#shared/domain/messaging/symptoms'
import type { SymptomRoute } from '#shared/domain/messaging/symptoms'
import { visitWords } from '#shared/domain/messaging/visit-words'
import { languages, rightToLeftLanguages } from '#shared/domain/messaging/vocabulary'
import type { Language } from '#shared/domain/messaging/vocabulary'

const noon = 12
const eveningFrom = 18
const answers: Readonly<Record<SymptomRoute, PageWordKey>> = { now: 'answerNow', today: 'answerToday', nurse: 'answerNurse', none: 'answerNone' }

/** What a patient may read on their own page: no finding, no diagnosis, no other eye's record. Before it is opened every link shows the same. */
export function presentLinkPage(loaded: LoadedLink | undefined, wanted: Language | undefined, now: Date): LinkPage {
  const language = wanted ?? languages.find(each => each === loaded?.patient.language) ?? 'en'
  const { words, symptoms } = pageWords[language]
  const shell = { language, direction: rightToLeftLanguages.includes(language) ? 'rtl' as const : 'ltr' as const, words, symptoms: symptomIds.map(id => ({ id, words: symptoms[id] })) }
  if (!loaded) return { opened: false, ...shell }
  const { patient, pathway, visit, site, later } = loaded
  const surgeryAt = pathway.operatedAt ?? pathway.surgeryAt
  const hour = inZone(now, site.zone).hour
  const when = visit ? visitWords(visit.startsAt, site.zone, language) : undefined
  const isToday = Boolean(visit && inZone(visit.startsAt, site.zone).toPlainDate().equals(inZone(now, site.zone).toPlainDate()))
  return {
    opened: true, ...shell,
    page: {
      greeting: fill(words[hour < noon ? 'morning' : hour < eveningFrom ? 'afternoon' : 'evening'], { name: patient.name.split(' ')[0] ?? patient.name }),
      expected: when ? fill(words[isToday ? 'expectedToday' : 'expectedOn'], when) : words.noVisit,
      about: pathway.eye === 'right' ? words.aboutRight : words.aboutLeft,
      unit: { name: site.name, phone: site.emergencyPhone, address: site.address, directions: site.directions },
      visit: visit && when ? { id: visit.id, ...when, stays: fill(words.staysBooked, when), answered: visit.confirmedAt ? 'coming' : visit.cannotComeAt ? 'cannot-come' : null } : null,
      reached: { surgery: Boolean(surgeryAt && surgeryAt <= now), later: later ? visitWords(later.startsAt, site.zone, language).date : null },
      afterSurgery: Boolean(surgeryAt && surgeryAt <= now),
      toldUs: presentTold(loaded, language),
    },
  }
}

/** Everything said in the last hours counts: what is added later never takes an urgent answer away. */
function presentTold({ told, site }: LoadedLink, language: Language): NonNullable<LinkPage['page']>['toldUs'] {
  const first = told.at(-1)
  if (!first) return null
  const { words, symptoms } = pageWords[language]
  const said = symptomIds.filter(id => told.some(check => check.answers[id]))
  const reading = readSymptoms(said)
  const route: SymptomRoute = told.some(check => check.urgency === 'now') ? 'now' : reading.route === 'none' && told.some(check => check.onNurseList) ? 'nurse' : reading.route
  return {
    at: fill(words.toldAt, visitWords((told.find(check => check.urgency === 'now') ?? first).at, site.zone, language)), route,
    words: [...said.map(id => symptoms[id]), ...told.map(check => check.words).filter(Boolean).reverse()], answer: fill(words[answers[route]], { phone: site.emergencyPhone }),
  }
}

function fill(text: string, values: Record<string, string>): string {
  return text.replace(/\{(\w+)\}/g, (_, name: string) => values[name] ?? '')
}
