import { Temporal } from 'temporal-polyfill'

/** One operated eye that needs a place. All times are instants. */
export interface BookingNeed {
  pathwayId: string
  patientId: string
  /** Where the patient belongs: the site of the pathway, or the one they asked for. */
  siteId: string
  isRequired: boolean
  /** No later place is safe. */
  latestSafeAt: Date
  /** Why it is needed, for the reason beside the place: "Only seeing eye." */
  because?: string
  inPerson: boolean
  atHospital: boolean
  beforeNoon: boolean
  /** The patient cannot come before, or must have begun by. */
  notBefore?: Date
  notAfter?: Date
  transport?: { siteId: string, arrivesAt: Date } | 'to-arrange'
  interpreter?: { language: string, from?: Date, to?: Date }
  /** The fellow eye's visit that is already booked: the same day at the same site. */
  fellowVisit?: { siteId: string, startsAt: Date }
}

/** One free place of a clinic session. */
export interface BookingPlace { placeId: string, siteId: string, siteName: string, isHospital: boolean, zone: string, room: string, startsAt: Date, minutes: number }

/** Minutes of travel from one site to another; a pair that is absent is not known, and nobody is sent there. */
export type SiteDistances = Readonly<Record<string, Readonly<Record<string, number>>>>

/** 'proposed': nobody is sent further than this for a check that their own site could have given. */
export const farthestMinutes = 45

export interface Surroundings { siteDistances: SiteDistances, now: Date }

export interface Constraint {
  id: string
  allows: (need: BookingNeed, place: BookingPlace, around: Surroundings) => boolean
  /** Why nothing fits, when this alone stands in the way. */
  words: (need: BookingNeed, zone: string) => string
  /** The ordinary work that would help; `place` is the soonest one that would then do. */
  wayOut: (need: BookingNeed, place: BookingPlace) => string
}

export function clockTime(at: Date, zone: string): string {
  return Temporal.Instant.fromEpochMilliseconds(at.getTime()).toZonedDateTimeISO(zone).toPlainTime().toString({ smallestUnit: 'minute' })
}
/** "Sat 28 March, 15:00" at the site. */
export function dayAndTime(at: Date, zone: string): string {
  const day = Temporal.Instant.fromEpochMilliseconds(at.getTime()).toZonedDateTimeISO(zone).toPlainDate()
  return `${weekdays[day.dayOfWeek - 1]} ${day.day} ${months[day.month - 1]}, ${clockTime(at, zone)}`
}
const weekdays = ['Mon', 'Tue', 'Wed', 'Thu', 'Fri', 'Sat', 'Sun']
const months = ['January', 'February', 'March', 'April', 'May', 'June', 'July', 'August', 'September', 'October', 'November', 'December']
const localDate = (at: Date, zone: string) => Temporal.Instant.fromEpochMilliseconds(at.getTime()).toZonedDateTimeISO(zone).toPlainDate().toString()
const isMorning = (at: Date, zone: string) => Temporal.Instant.fromEpochMilliseconds(at.getTime()).toZonedDateTimeISO(zone).hour < 12
const endOf = (place: BookingPlace) => new Date(place.startsAt.getTime() + place.minutes * 60_000)
const shown = (place: BookingPlace) => `${clockTime(place.startsAt, place.zone)}, ${place.room}, ${place.siteName}`

export function travelMinutes(need: BookingNeed, place: BookingPlace, distances: SiteDistances): number | undefined {
  return place.siteId === need.siteId ? 0 : distances[need.siteId]?.[place.siteId] ?? distances[place.siteId]?.[need.siteId]
}

/** What a place must satisfy. A place outside any of these is never proposed. */
export const constraints: readonly Constraint[] = [
  { id: 'past', allows: (_need, place, { now }) => place.startsAt > now, words: () => 'The places that would suit have passed.', wayOut: (_need, place) => `Open a later place than ${shown(place)}` },
  { id: 'too-late', allows: (need, place) => place.startsAt <= need.latestSafeAt, words: (need, zone) => `The free places come after ${dayAndTime(need.latestSafeAt, zone)}, the latest safe time.`, wayOut: (need, place) => `Open a place by ${dayAndTime(need.latestSafeAt, place.zone)}` },
  { id: 'hospital', allows: (need, place) => !need.atHospital || place.isHospital, words: () => 'It must be at the hospital, which has no free place in time.', wayOut: () => 'Open a place at the hospital' },
  { id: 'before-noon', allows: (need, place) => !need.beforeNoon || isMorning(place.startsAt, place.zone), words: () => 'It must be before noon, and no morning place is free.', wayOut: (_need, place) => `Open a morning place, or ask the surgeon about ${shown(place)}` },
  { id: 'patient-time', allows: (need, place) => (!need.notBefore || place.startsAt >= need.notBefore) && (!need.notAfter || place.startsAt <= need.notAfter), words: () => 'No free place is at a time when the patient can come.', wayOut: (_need, place) => `Ask the patient about ${shown(place)}` },
  { id: 'transport', allows: (need, place) => !need.transport || need.transport === 'to-arrange' || (place.siteId === need.transport.siteId && place.startsAt >= need.transport.arrivesAt), words: (need, zone) => need.transport && need.transport !== 'to-arrange' ? `Transport arrives at ${clockTime(need.transport.arrivesAt, zone)}; no free place there is later.` : '', wayOut: (_need, place) => `Ask transport for ${shown(place)}` },
  { id: 'interpreter', allows: (need, place) => (!need.interpreter?.from || place.startsAt >= need.interpreter.from) && (!need.interpreter?.to || endOf(place) <= need.interpreter.to), words: (need, zone) => `No free place falls in the interpreter’s time${need.interpreter?.from ? `, from ${clockTime(need.interpreter.from, zone)}` : ''}.`, wayOut: (_need, place) => `Ask the interpreter for ${shown(place)}` },
  { id: 'fellow-eye', allows: (need, place) => !need.fellowVisit || (place.siteId === need.fellowVisit.siteId && localDate(place.startsAt, place.zone) === localDate(need.fellowVisit.startsAt, place.zone)), words: () => 'The fellow eye is seen another day or elsewhere.', wayOut: (_need, place) => `Move the fellow eye’s visit, then book ${shown(place)}` },
  {
    id: 'distance', words: () => 'Only a site too far from the patient has a place.', wayOut: (_need, place) => `Ask the patient about ${shown(place)}`,
    allows: (need, place, { siteDistances }) => {
      const minutes = travelMinutes(need, place, siteDistances)
      return minutes !== undefined && minutes <= farthestMinutes
    },
  },
]

export function fits(need: BookingNeed, place: BookingPlace, around: Surroundings, leftOut?: string): boolean {
  return constraints.every(each => each.id === leftOut || each.allows(need, place, around))
}
